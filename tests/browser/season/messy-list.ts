import { parse } from "csv-parse/sync";
import { stringify } from "csv-stringify/sync";

/** A grower as the list of the season tells of them. All invented. */
export type ListedGrower = {
	name: string;
	contact: string;
	email: string;
	county: string;
	language: "en" | "es";
	trees: number;
};

const columns = ["Farm", "Grower", "E-mail", "County", "State", "Language", "Crop", "Trees"];
const counties = ["Johnson", "Linn", "Muscatine", "Washington", "Louisa"];

/** The same each time: every fourth speaks Spanish, every fortieth has no address. */
export const goodGrowers: ListedGrower[] = Array.from({ length: 400 }, (_, index): ListedGrower => {
	const speaksSpanish = index % 4 === 1;
	// No name begins another, so that each is found by its own.
	const number = String(index + 1).padStart(3, "0");
	return {
		name: speaksSpanish ? `Huerta Peñón ${number}` : `Larkspur Orchard ${number}`,
		contact: speaksSpanish ? `Íñigo Núñez ${number}` : `Ada Quill ${number}`,
		email: index % 40 === 39 ? "" : `grower-${number}@season.example`,
		county: counties[index % counties.length]!,
		language: speaksSpanish ? "es" : "en",
		trees: 1_000 + 10 * (index % 50),
	};
});

/** In the list before the file comes: the first two want no mail, and mail to the third came back. */
export const notToBeMailed = goodGrowers.slice(10, 13);

/** A row with one cell that is wrong, and what the page says of it. One without `right` cannot be mended: it is left out. */
type BadRow = { name: string; column: string; wrong: string; right: string | null; says: string };
export const badRows: BadRow[] = [
	{
		name: "Jay Hill",
		column: "County",
		wrong: "Jonhson",
		right: "Johnson",
		says: "County: no county is called Jonhson; did you mean Johnson?",
	},
	{
		name: "Muscat Ridge",
		column: "County",
		wrong: "Muscatin",
		right: "Muscatine",
		says: "County: no county is called Muscatin; did you mean Muscatine?",
	},
	{
		name: "Second Address",
		column: "E-mail",
		wrong: "GROWER-001@season.example",
		right: "second-address@season.example",
		says: "E-mail address is in row 5 already, for another operation",
	},
	{
		name: "Formula Acres",
		column: "E-mail",
		wrong: '=HYPERLINK("http://nowhere.example";"mail")',
		right: "formula-acres@season.example",
		says: "E-mail address is a formula: type its result instead",
	},
	{
		name: "Word Farm",
		column: "E-mail",
		wrong: "no address",
		right: "word-farm@season.example",
		says: "E-mail address must be an e-mail address",
	},
	{ name: "Lake Side", column: "State", wrong: "WI", right: null, says: "State: Wisconsin is not granted to you" },
];

const ofBadRow = ({ name }: BadRow, index: number): ListedGrower => ({
	name,
	contact: `Bo Wren ${index}`,
	email: `bo-${index}@season.example`,
	county: "Linn",
	language: "en",
	trees: 1_005,
});
const keyOf: Record<string, keyof ListedGrower> = { County: "county", "E-mail": "email" };

/** Who is in the list once the bad rows are mended. */
export const mendedGrowers: ListedGrower[] = badRows.flatMap((bad, index) =>
	bad.right === null ? [] : [{ ...ofBadRow(bad, index), [keyOf[bad.column]!]: bad.right }],
);

function rowOf({ name, contact, email, county, language, trees }: ListedGrower): string[] {
	const spoken = language === "es" ? "español" : "English";
	return [name, contact, email, county, "IA", spoken, "Apple", trees.toLocaleString("en-US")];
}

/** Semicolons, Latin-1, and above the columns' names a title and groups of columns, as merged headings are saved. */
export function messyFile(): Buffer {
	const good = goodGrowers.map(rowOf);
	const bad = badRows.map((row, index) => rowOf(ofBadRow(row, index)).with(columns.indexOf(row.column), row.wrong));
	const above = [["Growers of the east"], [], ["Who", "", "", "Where"]];
	const rows = [...above, columns, ...good.slice(0, 100), ...bad, ...good.slice(100)];
	return Buffer.from(stringify(rows, { delimiter: ";", record_delimiter: "windows" }), "latin1");
}

/** The file of rows to fix, as an associate sends it back. */
export function mendedFile(toMend: string): Buffer {
	const [header = [], ...rows] = parse(toMend, { bom: true }) as string[][];
	const mended = rows.flatMap((row) => {
		const bad = badRows.find(({ name }) => name === row[0]);
		if (!bad) throw new Error(`${row.join()} is no row to fix`);
		return bad.right === null ? [] : [row.with(header.indexOf(bad.column), bad.right)];
	});
	return Buffer.from(stringify([header, ...mended]));
}

/** What a citation is made of. The year is that of publication, the number is never given to other figures. */
export type Cited = {
	network: string;
	title: string;
	season: number;
	number: number;
	publishedAt: string;
	address: string;
};

/** For bibliographies in BibTeX: an organisation in double braces is not taken apart into first and last names. */
export function bibtex({ network, title, season, number, publishedAt, address }: Cited): string {
	const fields = {
		author: `{${escaped(network)}}`,
		title: `{${escaped(`${title}, ${season}`)}}`,
		year: publishedAt.slice(0, 4),
		month: String(Number(publishedAt.slice(5, 7))),
		howpublished: `Release ${number}`,
		url: address,
	};
	const lines = Object.entries(fields).map(([name, value]) => `  ${name} = {${value}}`);
	return `@misc{tallygrove-release-${number},\n${lines.join(",\n")}\n}\n`;
}

const escapes: Record<string, string> = {
	"\\": "\\textbackslash{}",
	"~": "\\textasciitilde{}",
	"^": "\\textasciicircum{}",
};
const escaped = (text: string) => text.replace(/[\\{}$&#%_~^]/g, (sign) => escapes[sign] ?? `\\${sign}`);

const oneLine = (text: string) => text.replace(/\s+/g, " ");

/** For reference managers: a line a tag, CRLF ends, as the RIS format has it. */
export function ris({ network, title, season, number, publishedAt, address }: Cited): string {
	const lines = [
		["TY", "DATA"],
		["AU", oneLine(network)],
		["TI", oneLine(`${title}, ${season}`)],
		["PY", publishedAt.slice(0, 4)],
		["DA", publishedAt.slice(0, 10).replaceAll("-", "/")],
		["PB", oneLine(network)],
		["ET", `Release ${number}`],
		["UR", address],
		["ER", ""],
	];
	return lines.map(([tag, value]) => `${tag}  - ${value}\r\n`).join("");
}

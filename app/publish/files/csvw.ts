import type { ColumnType } from "../data-file.ts";
import { type CodeTable, packageTables } from "./code-tables.ts";
import type { FileSource } from "./release-file.ts";

/** Names of XML Schema's types as CSVW writes them. */
const datatypes: Record<ColumnType, unknown> = {
	text: "string",
	integer: "integer",
	number: "number",
	date: { base: "date", format: "yyyy-MM-dd" },
};

const inLanguages = ({ en, es }: { en: string; es: string }) => [
	{ "@value": en, "@language": "en" },
	{ "@value": es, "@language": "es" },
];

/**
 * What the CSV files hold, after W3C's Metadata Vocabulary for Tabular Data (2015). Codes are declared as
 * strings, since a reader that guesses takes the zero off a county's code.
 */
export function csvwMetadata(source: FileSource): unknown {
	const { title, publishedAt, address, terms, license } = source;
	return {
		"@context": ["http://www.w3.org/ns/csvw", { "@language": "en" }],
		"@id": `${address}#tables`,
		"dc:title": inLanguages(title),
		"dc:identifier": address,
		"dc:issued": { "@value": publishedAt, "@type": "xsd:dateTime" },
		"dc:rights": inLanguages(terms),
		...(license && { "dc:license": { "@id": license } }),
		tables: packageTables(source).map(tableOf),
	};
}

function tableOf({ name, columns, key, codes }: CodeTable) {
	return {
		url: `${name}.csv`,
		dialect: { encoding: "utf-8", delimiter: ",", quoteChar: '"', doubleQuote: true, header: true },
		tableSchema: {
			columns: columns.map((column) => ({
				name: column.name,
				titles: [column.name],
				"dc:description": inLanguages(column.about),
				datatype: datatypes[column.type],
				required: column.required,
				null: "",
			})),
			primaryKey: key,
			...(codes.length > 0 && {
				foreignKeys: codes.map(({ columns: columnReference, table, keys }) => ({
					columnReference,
					reference: { resource: `${table}.csv`, columnReference: keys },
				})),
			}),
		},
	};
}

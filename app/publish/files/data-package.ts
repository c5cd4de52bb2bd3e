import { observationStatuses } from "../data-file.ts";
import { type CodeTable, type Column, packageTables } from "./code-tables.ts";
import type { FileSource, ReleaseFile } from "./release-file.ts";

const profile = "https://datapackage.org/profiles/2.0";
const types = { text: "string", integer: "integer", number: "number", date: "date" } as const;

/** A file of the package with what proves that it came whole. */
type Summed = Pick<ReleaseFile, "name"> & { bytes: number; sha256: string };

/** The descriptor of the CSV files after Data Package and Table Schema, version 2.0. */
export function dataPackage(source: FileSource, sums: readonly Summed[]): unknown {
	const { name, address, title, about, version, publishedAt, terms, license } = source;
	return {
		$schema: `${profile}/datapackage.json`,
		name,
		id: address,
		title: title.en,
		description: about.en,
		homepage: address,
		version,
		created: publishedAt,
		// A property of our own, as the standard allows: terms are no licence.
		termsOfUse: terms,
		...(license && { licenses: [{ path: license }] }),
		resources: packageTables(source).map((table) => resourceOf(table, source, sums)),
	};
}

function resourceOf(table: CodeTable, { words }: FileSource, sums: readonly Summed[]) {
	const path = `${table.name}.csv`;
	const sum = sums.find(({ name }) => name === path);
	if (!sum) throw new Error(`${path} has no checksum`);
	return {
		name: table.name,
		type: "table",
		path,
		title: words.en(`dataroom:file.table.${table.name}`),
		format: "csv",
		mediatype: "text/csv",
		encoding: "utf-8",
		bytes: sum.bytes,
		hash: `sha256:${sum.sha256}`,
		dialect: { delimiter: ",", lineTerminator: "\r\n", quoteChar: '"', doubleQuote: true, header: true },
		schema: {
			fields: table.columns.map((column) => ({
				name: column.name,
				type: types[column.type],
				description: column.about.en,
				...(column.required && { constraints: { required: true } }),
				...categoriesOf(column, words),
			})),
			missingValues: [""],
			primaryKey: table.key,
			...(table.codes.length > 0 && {
				foreignKeys: table.codes.map(({ columns: fields, table: resource, keys }) => ({
					fields,
					reference: { resource, fields: keys },
				})),
			}),
		},
	};
}

const steadiness = ["steady", "care", "rough"] as const;

function categoriesOf({ name }: Column, words: FileSource["words"]) {
	if (name === "status")
		return {
			categories: observationStatuses.map((value) => ({ value, label: words.en(`dataroom:status.${value}.name`) })),
		};
	if (name === "steadiness")
		return { categories: steadiness.map((value) => ({ value, label: words.en(`common:steadiness.${value}`) })) };
	return {};
}

import { type ColumnType, columnType, type DataColumn, dataColumns, filledColumns, toCsv } from "../data-file.ts";
import { type FileSource, inBoth } from "./release-file.ts";

/** A column as CSVW and Table Schema describe it. */
export type Column = { name: string; type: ColumnType; required: boolean; about: { en: string; es: string } };

/** A table of the package: its columns, its key, and which of its columns are codes of another table. */
export type CodeTable = {
	name: string;
	columns: Column[];
	key: string[];
	codes: { columns: string[]; table: string; keys: string[] }[];
	rows: (string | number | null)[][];
};

const text = (name: string, about: Column["about"], required = true): Column => ({
	name,
	type: "text",
	required,
	about,
});

/** The cells and the lists of codes that they use, each told in both languages; of a table also the releases. */
export function packageTables(source: FileSource): CodeTable[] {
	const lists = [cellsTable(source), measuresTable(source), cropsTable(source), areasTable(source)];
	return source.isTable ? [...lists, releasesTable(source)] : lists;
}

export const tableCsv = ({ columns, rows }: CodeTable): string =>
	toCsv(
		columns.map(({ name }) => name),
		rows,
	);

function cellsTable({ records, words, isTable }: FileSource): CodeTable {
	const column = (name: DataColumn): Column => ({
		name,
		type: columnType(name),
		required: filledColumns.includes(name),
		about: inBoth(words, `dataroom:column.${name}.about`),
	});
	return {
		name: "cells",
		columns: dataColumns.map(column),
		key: [...ofRelease(isTable), "measure", "crop", "area_code"],
		codes: [
			sameColumns("measures", [...ofRelease(isTable), "measure"]),
			sameColumns("crops", ["crop"]),
			sameColumns("areas", [...ofRelease(isTable), "area_code"]),
			...(isTable ? [sameColumns("releases", ["release"])] : []),
		],
		rows: records.map((record) => dataColumns.map((name) => record[name])),
	};
}

/** Each release of a table defines its own codes, so there the release belongs to their key. */
const ofRelease = (isTable: boolean) => (isTable ? ["release"] : []);
const sameColumns = (table: string, columns: string[]) => ({ columns, table, keys: columns });

const releaseColumn = (words: FileSource["words"]): Column => ({
	name: "release",
	type: "integer",
	required: true,
	about: inBoth(words, "dataroom:column.release.about"),
});

function measuresTable({ parts, words, isTable }: FileSource): CodeTable {
	const about = (name: string) => inBoth(words, `dataroom:codeColumn.${name}`);
	return {
		name: "measures",
		columns: [
			...(isTable ? [releaseColumn(words)] : []),
			text("measure", inBoth(words, "dataroom:column.measure.about")),
			text("name_en", about("nameEnglish")),
			text("name_es", about("nameSpanish")),
			text("description_en", about("descriptionEnglish")),
			text("description_es", about("descriptionSpanish")),
			text("kind", about("kind")),
			text("unit", about("unit")),
			{ name: "decimals", type: "integer", required: true, about: about("decimals") },
		],
		key: [...ofRelease(isTable), "measure"],
		codes: [],
		rows: parts.flatMap(({ release, measures }) =>
			measures.map(({ key, label, description, kind, unit, decimals }) => [
				...(isTable ? [release.number] : []),
				key,
				label.en,
				label.es,
				description.en,
				description.es,
				kind,
				unit,
				decimals,
			]),
		),
	};
}

function cropsTable({ crops, words }: FileSource): CodeTable {
	return {
		name: "crops",
		columns: [
			text("crop", inBoth(words, "dataroom:column.crop.about")),
			text("name_en", inBoth(words, "dataroom:codeColumn.nameEnglish")),
			text("name_es", inBoth(words, "dataroom:codeColumn.nameSpanish")),
		],
		key: ["crop"],
		codes: [],
		rows: crops.map((crop) => [crop, words.en(`common:crop.${crop}`), words.es(`common:crop.${crop}`)]),
	};
}

function areasTable({ parts, words, isTable }: FileSource): CodeTable {
	return {
		name: "areas",
		columns: [
			...(isTable ? [releaseColumn(words)] : []),
			text("area_code", inBoth(words, "dataroom:column.area_code.about")),
			text("area_kind", inBoth(words, "dataroom:column.area_kind.about")),
			text("area_name", inBoth(words, "dataroom:column.area_name.about")),
			text("lies_in", inBoth(words, "dataroom:codeColumn.liesIn"), false),
			text("state_code", inBoth(words, "dataroom:column.state_code.about"), false),
		],
		key: [...ofRelease(isTable), "area_code"],
		codes: [],
		rows: parts.flatMap(({ release, areas }) =>
			areas.map(({ key, kind, name, parentKey, stateFips }) => [
				...(isTable ? [release.number] : []),
				key,
				kind,
				name,
				parentKey,
				stateFips,
			]),
		),
	};
}

function releasesTable({ parts, words }: FileSource): CodeTable {
	const about = (name: string) => inBoth(words, `dataroom:codeColumn.${name}`);
	return {
		name: "releases",
		columns: [
			releaseColumn(words),
			{ name: "season", type: "integer", required: true, about: inBoth(words, "dataroom:column.season.about") },
			text("title_en", about("nameEnglish")),
			text("title_es", about("nameSpanish")),
			text("form", about("form")),
			text("published_at", about("publishedAt")),
			{ name: "edition", type: "integer", required: true, about: about("edition") },
			text("code_version", about("codeVersion")),
		],
		key: ["release"],
		codes: [],
		rows: parts.map(({ release }) => [
			release.number,
			release.season,
			release.title.en,
			release.title.es,
			release.formKey,
			release.publishedAt,
			release.edition,
			release.codeVersion,
		]),
	};
}

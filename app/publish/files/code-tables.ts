import { type ColumnType, columnType, type DataColumn, dataColumns, filledColumns, toCsv } from "../data-file.ts";
import { type FileSource, inBoth } from "./release-file.ts";

/** A column as CSVW and Table Schema describe it. */
export type Column = { name: string; type: ColumnType; required: boolean; about: { en: string; es: string } };

/** A table of the package: its columns, its key, and which of its columns are codes of another table. */
export type CodeTable = {
	name: string;
	columns: Column[];
	key: string[];
	codes: { column: string; table: string; key: string }[];
	rows: (string | number | null)[][];
};

const text = (name: string, about: Column["about"], required = true): Column => ({
	name,
	type: "text",
	required,
	about,
});

/** The cells and the three lists of codes that they use, each told in both languages. */
export function packageTables(source: FileSource): CodeTable[] {
	return [cellsTable(source), measuresTable(source), cropsTable(source), areasTable(source)];
}

export const tableCsv = ({ columns, rows }: CodeTable): string =>
	toCsv(
		columns.map(({ name }) => name),
		rows,
	);

function cellsTable({ records, words }: FileSource): CodeTable {
	const column = (name: DataColumn): Column => ({
		name,
		type: columnType(name),
		required: filledColumns.includes(name),
		about: inBoth(words, `dataroom:column.${name}.about`),
	});
	return {
		name: "cells",
		columns: dataColumns.map(column),
		key: ["measure", "crop", "area_code"],
		codes: [
			{ column: "measure", table: "measures", key: "measure" },
			{ column: "crop", table: "crops", key: "crop" },
			{ column: "area_code", table: "areas", key: "area_code" },
		],
		rows: records.map((record) => dataColumns.map((name) => record[name])),
	};
}

function measuresTable({ measures, words }: FileSource): CodeTable {
	const about = (name: string) => inBoth(words, `dataroom:codeColumn.${name}`);
	return {
		name: "measures",
		columns: [
			text("measure", inBoth(words, "dataroom:column.measure.about")),
			text("name_en", about("nameEnglish")),
			text("name_es", about("nameSpanish")),
			text("description_en", about("descriptionEnglish")),
			text("description_es", about("descriptionSpanish")),
			text("kind", about("kind")),
			text("unit", about("unit")),
			{ name: "decimals", type: "integer", required: true, about: about("decimals") },
		],
		key: ["measure"],
		codes: [],
		rows: measures.map(({ key, label, description, kind, unit, decimals }) => [
			key,
			label.en,
			label.es,
			description.en,
			description.es,
			kind,
			unit,
			decimals,
		]),
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

function areasTable({ areas, words }: FileSource): CodeTable {
	return {
		name: "areas",
		columns: [
			text("area_code", inBoth(words, "dataroom:column.area_code.about")),
			text("area_kind", inBoth(words, "dataroom:column.area_kind.about")),
			text("area_name", inBoth(words, "dataroom:column.area_name.about")),
			text("lies_in", inBoth(words, "dataroom:codeColumn.liesIn"), false),
			text("state_code", inBoth(words, "dataroom:column.state_code.about"), false),
		],
		key: ["area_code"],
		codes: [],
		rows: areas.map(({ key, kind, name, parentKey, stateFips }) => [key, kind, name, parentKey, stateFips]),
	};
}

import { createHash } from "node:crypto";
import { zipSync } from "fflate";
import { areaKinds, type AreaKind } from "../cell.ts";
import { recordsCsv } from "../data-file.ts";
import { packageTables, tableCsv } from "./code-tables.ts";
import { codebookCsv, codebookJson } from "./codebook.ts";
import { csvwMetadata } from "./csvw.ts";
import { dataPackage } from "./data-package.ts";
import { cellsGeojson } from "./geojson.server.ts";
import { cellsParquet } from "./parquet.server.ts";
import { csvType, type FileSource, jsonFile, type ReleaseFile, textFile } from "./release-file.ts";
import { sdmxCsv, sdmxStructure } from "./sdmx.ts";
import { cellsWorkbook } from "./workbook.server.ts";

const geojsonNames: Record<AreaKind, string> = {
	county: "counties.geojson",
	district: "districts.geojson",
	state: "states.geojson",
	region: "region.geojson",
};

/** A file by its name, and how it is made where it is wanted. */
type Maker = { name: string; make: () => ReleaseFile | Promise<ReleaseFile> };

const json = (name: string, mediaType: string, value: () => unknown): Maker => ({
	name,
	make: () => jsonFile(name, mediaType, value()),
});
const text = (name: string, mediaType: string, content: () => string): Maker => ({
	name,
	make: () => textFile(name, mediaType, content()),
});

/** How every file is made that rests on no other, in the order in which they are listed. */
function makersOf(source: FileSource): Maker[] {
	let csvFiles: ReleaseFile[] | undefined;
	const tables = () => (csvFiles ??= tableFiles(source));
	const told = new Set(source.parts.flatMap(({ areas }) => areas.map(({ kind }) => kind)));
	return [
		...packageTables(source).map(({ name }, index) => ({ name: `${name}.csv`, make: () => tables()[index]! })),
		...source.besides.map((file) => ({ name: file.name, make: () => file })),
		json("csv-metadata.json", "application/csvm+json", () => csvwMetadata(source)),
		json("datapackage.json", "application/json", () => dataPackage(source, tables().map(summed))),
		text("cells.sdmx.csv", "application/vnd.sdmx.data+csv; version=2.0.0", () => sdmxCsv(source)),
		json("sdmx-structure.json", "application/vnd.sdmx.structure+json; version=2.0.0", () => sdmxStructure(source)),
		...areaKinds
			.filter((kind) => told.has(kind))
			.map((kind) =>
				text(geojsonNames[kind], "application/geo+json", () => `${JSON.stringify(cellsGeojson(source, kind))}\n`),
			),
		{
			name: "cells.parquet",
			make: () => ({
				name: "cells.parquet",
				mediaType: "application/vnd.apache.parquet",
				content: cellsParquet(source),
			}),
		},
		{
			name: "cells.xlsx",
			make: async () => ({ name: "cells.xlsx", mediaType: workbookType, content: await cellsWorkbook(source) }),
		},
		json("codebook.json", "application/json", () => codebookJson(source)),
		text("codebook.csv", csvType, () => codebookCsv(source)),
	];
}

const workbookType = "application/vnd.openxmlformats-officedocument.spreadsheetml.sheet";

const tableFiles = (source: FileSource): ReleaseFile[] =>
	packageTables(source).map((table) =>
		textFile(`${table.name}.csv`, csvType, table.name === "cells" ? recordsCsv(source.records) : tableCsv(table)),
	);

/** All files in the order they are listed: the archive of all, then each by itself. */
export async function makeFiles(source: FileSource): Promise<ReleaseFile[]> {
	const files: ReleaseFile[] = [];
	for (const { make } of makersOf(source)) files.push(await make());
	const sums = textFile(sumsName, "text/plain; charset=utf-8", checksums(files));
	return [archive(source, [...files, sums]), ...files, sums];
}

const sumsName = "SHA256SUMS";
const archiveName = ({ name }: FileSource) => `${name}.zip`;

/** The names of all files, as `makeFiles` makes them. */
export function fileNames(source: FileSource): string[] {
	return [archiveName(source), ...makersOf(source).map(({ name }) => name), sumsName];
}

/** One file by its name, made alone where it rests on no other; undefined where there is none of that name. */
export async function makeFile(source: FileSource, name: string): Promise<ReleaseFile | undefined> {
	if (name === sumsName || name === archiveName(source))
		return (await makeFiles(source)).find((file) => file.name === name);
	return makersOf(source)
		.find((maker) => maker.name === name)
		?.make();
}

export const sha256 = (content: Uint8Array): string => createHash("sha256").update(content).digest("hex");

const summed = ({ name, content }: ReleaseFile) => ({ name, bytes: content.length, sha256: sha256(content) });

/** As `sha256sum --check` reads it. */
const checksums = (files: readonly ReleaseFile[]): string =>
	files.map(({ name, content }) => `${sha256(content)}  ${name}\n`).join("");

function archive(source: FileSource, files: readonly ReleaseFile[]): ReleaseFile {
	const entries = files.map(({ name, content }) => [`${source.name}/${name}`, content] as const);
	// Entries carry the source's own moment: the same source gives the same archive, whenever it is made.
	const content = zipSync(Object.fromEntries(entries), { mtime: new Date(source.publishedAt), level: 6 });
	return { name: archiveName(source), mediaType: "application/zip", content };
}

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

/** All files of a release in the order they are listed: the archive of all, then each by itself. */
export async function makeFiles(source: FileSource): Promise<ReleaseFile[]> {
	const csvFiles = packageTables(source).map((table) =>
		textFile(`${table.name}.csv`, csvType, table.name === "cells" ? recordsCsv(source.records) : tableCsv(table)),
	);
	const kinds = areaKinds.filter((kind) => source.areas.some((area) => area.kind === kind));
	const files = [
		...csvFiles,
		jsonFile("csv-metadata.json", "application/csvm+json", csvwMetadata(source)),
		jsonFile("datapackage.json", "application/json", dataPackage(source, csvFiles.map(summed))),
		textFile("cells.sdmx.csv", "application/vnd.sdmx.data+csv; version=2.0.0", sdmxCsv(source)),
		jsonFile("sdmx-structure.json", "application/vnd.sdmx.structure+json; version=2.0.0", sdmxStructure(source)),
		...kinds.map((kind) =>
			textFile(geojsonNames[kind], "application/geo+json", `${JSON.stringify(cellsGeojson(source, kind))}\n`),
		),
		{ name: "cells.parquet", mediaType: "application/vnd.apache.parquet", content: cellsParquet(source) },
		{
			name: "cells.xlsx",
			mediaType: "application/vnd.openxmlformats-officedocument.spreadsheetml.sheet",
			content: await cellsWorkbook(source),
		},
		jsonFile("codebook.json", "application/json", codebookJson(source)),
		textFile("codebook.csv", csvType, codebookCsv(source)),
	];
	const sums = textFile("SHA256SUMS", "text/plain; charset=utf-8", checksums(files));
	return [archive(source, [...files, sums]), ...files, sums];
}

export const sha256 = (content: Uint8Array): string => createHash("sha256").update(content).digest("hex");

const summed = ({ name, content }: ReleaseFile) => ({ name, bytes: content.length, sha256: sha256(content) });

/** As `sha256sum --check` reads it. */
const checksums = (files: readonly ReleaseFile[]): string =>
	files.map(({ name, content }) => `${sha256(content)}  ${name}\n`).join("");

function archive({ release }: FileSource, files: readonly ReleaseFile[]): ReleaseFile {
	const folder = `tallygrove-release-${release.number}`;
	const entries = files.map(({ name, content }) => [`${folder}/${name}`, content] as const);
	// Entries carry the release's own moment: the same release gives the same archive, whenever it is made.
	const content = zipSync(Object.fromEntries(entries), { mtime: new Date(release.publishedAt), level: 6 });
	return { name: `${folder}.zip`, mediaType: "application/zip", content };
}

import { createHash } from "node:crypto";
import type { Language } from "#app/i18n/language.ts";
import type { TFunction } from "i18next";
import { env } from "#app/lib/env.server.ts";
import { findAskedForm } from "../asked-form.server.ts";
import type { DataRecord } from "../data-file.ts";
import { csvType, type FilePart, type FileSource, inBoth, textFile } from "../files/release-file.ts";
import { findRelease, listAreas, listMeasures } from "../releases.server.ts";
import { termsOf } from "../terms.ts";
import { cropsOf, type TableCatalogue } from "./catalogue.ts";
import { laidOutCsv } from "./laid-out.ts";
import { searchOf, type TableSelection } from "./selection.ts";

/** The address's name of the archive, whose own name is made of the table's choice. */
export const tableArchive = "table.zip";

type Chosen = { catalogue: TableCatalogue; selection: TableSelection; records: readonly DataRecord[] };

/** What a table's files are made from: its cells, and of each release in it the measures, crops and areas that they use. */
export async function tableSource(
	{ catalogue, selection, records }: Chosen,
	words: Record<Language, TFunction>,
	site: string,
): Promise<FileSource> {
	const numbers = [...new Set(records.map(({ release }) => release))];
	const parts = (await Promise.all(numbers.map((number) => partOfRelease(number, records)))).filter(
		(part) => part !== undefined,
	);
	const search = searchOf(selection);
	const address = `${site}/dataroom/tables?${search}`;
	const id = createHash("sha256").update(search).digest("hex").slice(0, 10);
	const crops = new Set(records.map(({ crop }) => crop));
	const values = { address };
	return {
		parts,
		isTable: true,
		name: `tallygrove-table-${id}`,
		structureId: `TABLE_${id.toUpperCase()}`,
		title: inBoth(words, "dataroom:tables.file.title"),
		about: inBoth(words, "dataroom:tables.file.about", values),
		codebookTitle: inBoth(words, "dataroom:tables.file.codebook"),
		publishedAt:
			parts
				.map(({ release }) => release.publishedAt)
				.toSorted()
				.at(-1) ?? new Date(0).toISOString(),
		version: "1.0.0",
		crops: cropsOf(catalogue, numbers).filter((crop) => crops.has(crop)),
		records,
		words,
		terms: termsOf(words),
		license: env().DATA_LICENSE_URL ?? null,
		address,
		besides: [textFile("table.csv", csvType, laidOutCsv(catalogue, selection, records))],
	};
}

async function partOfRelease(number: number, records: readonly DataRecord[]): Promise<FilePart | undefined> {
	const release = await findRelease(number);
	if (!release || release.withdrawn) return undefined;
	const [measures, areas, asked] = await Promise.all([
		listMeasures(release.releaseId),
		listAreas(release.releaseId),
		findAskedForm(release.releaseId),
	]);
	const own = records.filter((record) => record.release === number);
	const told = new Set(own.map(({ measure }) => measure));
	const lying = new Set(own.map(({ area_code: code }) => code));
	return {
		release,
		measures: measures.filter(({ key }) => told.has(key)),
		areas: areas.filter(({ key }) => lying.has(key)).toSorted((a, b) => (a.key < b.key ? -1 : 1)),
		outlined: areas,
		asked,
	};
}

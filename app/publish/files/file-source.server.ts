import type { Language } from "#app/i18n/language.ts";
import type { TFunction } from "i18next";
import { env } from "#app/lib/env.server.ts";
import { findAskedForm } from "../asked-form.server.ts";
import { listDataRows } from "../data-file.server.ts";
import { toRecord } from "../data-file.ts";
import { findReleaseById, listAreas, listCrops, listMeasures } from "../releases.server.ts";
import { termsOf } from "../terms.ts";
import { type FileSource, inBoth } from "./release-file.ts";

/** Everything that a release's files are made from, read as the reader; undefined for one that is withdrawn or not there. */
export async function findFileSource(
	releaseId: string,
	words: Record<Language, TFunction>,
	site: string,
): Promise<FileSource | undefined> {
	const release = await findReleaseById(releaseId);
	if (!release || release.withdrawn) return undefined;
	const [measures, areas, crops, rows, asked] = await Promise.all([
		listMeasures(releaseId),
		listAreas(releaseId),
		listCrops(releaseId),
		listDataRows(releaseId),
		findAskedForm(releaseId),
	]);
	const told = areas.toSorted((a, b) => (a.key < b.key ? -1 : 1));
	const values = { number: release.number, season: release.season };
	return {
		parts: [{ release, measures, areas: told, outlined: told, asked }],
		isTable: false,
		name: `tallygrove-release-${release.number}`,
		structureId: `RELEASE_${release.number}`,
		title: release.title,
		about: inBoth(words, "dataroom:file.packageAbout", values),
		codebookTitle: inBoth(words, "dataroom:file.workbookTitle", values),
		publishedAt: release.publishedAt,
		version: `${release.number}.0.0`,
		crops,
		records: rows.map((row) => toRecord(release, row)),
		words,
		terms: termsOf(words),
		license: env().DATA_LICENSE_URL ?? null,
		address: `${site}/data/${release.number}`,
		besides: [],
	};
}

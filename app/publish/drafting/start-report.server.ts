import type { Kysely } from "kysely";
import type { Trx } from "#app/auth/scope.server.ts";
import { logEvent } from "#app/auth/event-log.server.ts";
import { listCells, listCropCells } from "../cells.server.ts";
import { leadingCell, leadingMeasure } from "../finding.ts";
import type { ReaderDB } from "../reader.server.ts";
import { findReleaseById, listCrops, listMeasures } from "../releases.server.ts";
import { slugOf } from "../report.ts";
import type { ReleaseMeasure } from "../release.ts";
import { findEarlier } from "../report-source.server.ts";
import { keepEdit } from "./report-edits.server.ts";
import { draftReport, type Say } from "./draft-report.ts";

export type Author = { personId: string; displayName: string };

/**
 * Starts a report on a release with a first draft made from it, in the caller's transaction. The release is read through
 * that transaction, so that one published in it can be written about at once.
 * @returns the new report's id, or undefined where there is no such release or it has no measure.
 */
export async function startReport(
	trx: Trx,
	author: Author,
	releaseId: string,
	say: { en: Say; es: Say },
): Promise<string | undefined> {
	// Only the released tables are read here; the type says so.
	const released = trx as unknown as Kysely<ReaderDB>;
	const release = await findReleaseById(releaseId, released);
	const measures = release ? await listMeasures(releaseId, released) : [];
	const measure = leadingMeasure(measures);
	if (!release || !measure) return undefined;

	const crops = await listCropCells(releaseId, measure.key, "network", released);
	const worst = leadingCell(measure, crops);
	const districts = worst ? await listCells(releaseId, measure.key, worst.cropKey, "district", released) : [];
	const earlier = await findEarlier(
		release,
		crops.map(({ cropKey }) => ({ measure: measure.key, crop: cropKey, area: "network" })),
		released,
	);
	const content = draftReport({
		release,
		measures,
		cropsOf: Object.fromEntries(
			await Promise.all(measures.map(async ({ key }) => [key, await listCrops(releaseId, key, released)] as const)),
		),
		measure,
		crops,
		districts,
		say,
		earlier: Object.fromEntries(Object.entries(earlier).map(([key, cells]) => [key.split("|")[1] ?? "", cells])),
		pests: await listPests(releaseId, measures, released),
	});
	const slug = await freeSlug(trx, slugOf(content.title.en));
	const { report_id } = await trx
		.insertInto("publish.report")
		.values({
			slug,
			release_id: releaseId,
			content: JSON.stringify(content),
			created_by: author.personId,
			author_name: author.displayName,
		})
		.returning("report_id")
		.executeTakeFirstOrThrow();
	await keepEdit(trx, author, report_id, 1, content);
	await logEvent(trx, {
		personId: author.personId,
		action: "report.started",
		subjectKind: "report",
		subjectId: report_id,
		detail: { release: release.number },
	});
	return report_id;
}

/** How many saw each pest, crop by crop, in the whole network. */
async function listPests(releaseId: string, measures: ReleaseMeasure[], released: Kysely<ReaderDB>) {
	const pests = measures.filter(
		({ hue, kind, key }) => hue === "pests" && kind === "proportion" && key.endsWith("_seen"),
	);
	const cells = await Promise.all(
		pests.map(async (measure) => {
			const ofCrops = await listCropCells(releaseId, measure.key, "network", released);
			return ofCrops.filter(({ cropKey }) => cropKey !== "all").map((cell) => ({ measure, cell }));
		}),
	);
	return cells.flat();
}

/** The address, with the first number that makes it one of its own. */
async function freeSlug(trx: Trx, slug: string): Promise<string> {
	const rows = await trx.selectFrom("publish.report").select("slug").where("slug", "like", `${slug}%`).execute();
	const taken = new Set(rows.map((row) => row.slug));
	if (!taken.has(slug)) return slug;
	let number = 2;
	while (taken.has(`${slug}-${number}`)) number += 1;
	return `${slug}-${number}`;
}

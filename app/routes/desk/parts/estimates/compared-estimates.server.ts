import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { estimateByWeights } from "#app/jobs/weighed-estimates.server.ts";
import { pageOf } from "#app/lib/page-of.ts";
import { findLatestDraft, listDraftCells } from "#app/release/drafts.server.ts";
import { compareFigures, type ComparedRow } from "./compared-rows.ts";
import { measuresOf, readDraftInputs } from "./draft-estimates.server.ts";
import type { ComparedQuery } from "./estimates.schema.ts";

/**
 * Figures as the newest release draft has them beside those of the tallies as they stand: what corrections since have
 * moved. The network's own row only where the viewer holds every state of the survey.
 * @returns undefined for a survey that asks in none of the viewer's states; `draftedAt` is null before the first draft.
 */
export async function listComparedEstimates(trx: Trx, viewer: Associate, surveyId: string, asked: ComparedQuery) {
	const inputs = await readDraftInputs(trx, viewer, surveyId);
	if (!inputs) return undefined;
	const { survey } = inputs;
	const crops = [...(inputs.measures.some((measure) => measure.acrossCrops) ? ["all"] : []), ...survey.cropKeys];
	const query = { ...asked, crop: crops.includes(asked.crop) ? asked.crop : (crops[0] ?? "all") };
	const draft = await findLatestDraft(trx, viewer, surveyId);
	const cells = draft?.method ? await listDraftCells(trx, draft.releaseDraftId) : [];
	const measures = measuresOf(inputs, query.crop);
	const areas = inputs.areas.filter((area) => area.kind !== "region" || survey.statesNotHeld.length === 0);
	const tallies = inputs.tallies.filter((tally) => tally.cropKey === query.crop);
	const { estimates } = await estimateByWeights(trx, { ...inputs, measures, tallies });
	const keys = measures.map(({ key }) => key);
	const ofCrop = cells.filter((cell) => cell.cropKey === query.crop);
	const rows = compareFigures(areas, keys, ofCrop, estimates);
	const shown = rows.filter((row) => query.show === "all" || row.changed);
	return {
		query,
		crops,
		measures: measures.map(({ key, label, unit, decimals }) => ({ key, label, unit, decimals, season: survey.season })),
		statesNotHeld: survey.statesNotHeld,
		draftedAt: draft?.method ? (draft.computedAt ?? draft.draftedAt) : null,
		/** A draft that was sent back keeps the weights of its day. */
		isReweighted: draft?.method ? draft.method.weighting !== survey.weighting : false,
		timeZone: survey.timeZone,
		changed: rows.filter((row) => row.changed).length,
		...pageOf(sortCompared(shown, query), query.page),
	};
}

/** By the difference with its sign; what has none comes last either way. */
function sortCompared(
	rows: ComparedRow[],
	{ sort, direction }: Pick<ComparedQuery, "sort" | "direction">,
): ComparedRow[] {
	if (sort === "area") return direction === "desc" ? rows.toReversed() : rows;
	const sign = direction === "desc" ? -1 : 1;
	return rows.toSorted((a, b) => {
		if (a.difference === null || b.difference === null)
			return Number(a.difference === null) - Number(b.difference === null);
		return sign * (a.difference - b.difference);
	});
}

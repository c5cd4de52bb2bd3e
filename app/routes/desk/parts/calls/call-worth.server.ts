import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { listCallCells, type WorthCell } from "#app/collect/calls.server.ts";
import type { FormDefinition } from "#app/collect/form.ts";
import { findSurveyForm } from "#app/collect/forms.server.ts";
import { spreadByStratum, worthOfCalls } from "#app/estimate/calls.ts";
import { domainStrata } from "#app/estimate/domain.ts";
import { joinStrata, respondentsByStratum } from "#app/estimate/strata.ts";
import { listFrameStrata, listTallies } from "#app/tally/tally.server.ts";

/**
 * What one more answer is worth in each county and stratum of the viewer's states, by the spread of the survey's first
 * measure that is told of all crops together. Before there is any spread, or where a survey asks for days alone,
 * operations are supposed to vary as their trees do. The caller has found the survey to ask in a state of the viewer's.
 * @returns undefined for a survey without a form.
 */
export async function readCallWorth(trx: Trx, viewer: Associate, surveyId: string): Promise<WorthCell[] | undefined> {
	const definition = await findSurveyForm(trx, surveyId);
	if (!definition) return undefined;
	const cells = await listCallCells(trx, viewer, surveyId);
	return worthOfCalls(cells, await readSpreads(trx, surveyId, definition)).map((told, i) => ({
		...told,
		frameSize: cells[i]!.frameSize,
		answered: cells[i]!.answered,
	}));
}

async function readSpreads(trx: Trx, surveyId: string, { measures }: FormDefinition) {
	const measure = measures.find(({ kind, acrossCrops, base }) => kind !== "day" && acrossCrops && !base);
	if (!measure || measure.kind === "day") return null;
	const frame = await listFrameStrata(trx, surveyId);
	const own = await listTallies(trx, surveyId, { measureKeys: [measure.key], cropKey: "all" });
	const joined = joinStrata(
		frame.filter(({ cropKey }) => cropKey === "all"),
		respondentsByStratum(own),
	);
	// Strata without answers are left out there, in the same order.
	const withAnswers = joined.strata.filter(({ respondents }) => respondents > 0);
	const strata = domainStrata(joined, own).map((stratum, i) => ({
		...stratum,
		stratumKeys: withAnswers[i]!.stratumKeys,
	}));
	return spreadByStratum(measure.kind, strata);
}

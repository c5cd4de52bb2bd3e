import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { listCallCells, type WorthCell } from "#app/collect/calls.server.ts";
import { spreadByStratum, worthOfCalls } from "#app/estimate/calls.ts";
import { domainStrata } from "#app/estimate/domain.ts";
import { joinStrata, respondentsByStratum } from "#app/estimate/strata.ts";
import { type DraftInputs, readDraftInputs } from "../estimates/draft-estimates.server.ts";

/**
 * What one more answer is worth in each county and stratum of the viewer's states, by the spread of the survey's first
 * measure that is told of all crops together. Before there is any spread, or where a survey asks for days alone,
 * operations are supposed to vary as their trees do.
 * @returns undefined for a survey that asks in none of the viewer's states.
 */
export async function readCallWorth(trx: Trx, viewer: Associate, surveyId: string): Promise<WorthCell[] | undefined> {
	const inputs = await readDraftInputs(trx, viewer, surveyId);
	if (!inputs) return undefined;
	const cells = await listCallCells(trx, viewer, surveyId);
	return worthOfCalls(cells, spreadsOf(inputs)).map((told, i) => ({
		...told,
		frameSize: cells[i]!.frameSize,
		answered: cells[i]!.answered,
	}));
}

function spreadsOf({ measures, tallies, frame }: DraftInputs): Map<string, number> | null {
	const measure = measures.find(({ kind, acrossCrops }) => kind !== "day" && acrossCrops);
	if (!measure || measure.kind === "day") return null;
	const own = tallies.filter(({ measureKey, cropKey }) => measureKey === measure.key && cropKey === "all");
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

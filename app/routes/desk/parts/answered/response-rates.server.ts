import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { findEarlierSurvey, findSurveyDays, listAnsweredDays } from "#app/collect/answered-days.server.ts";
import type { AnsweredQuery } from "#app/collect/answered.schema.ts";
import { listOutcomes, type OutcomeRow } from "#app/collect/dispositions.server.ts";
import { sizeClasses } from "#app/collect/frame.ts";
import { findSurvey } from "#app/collect/surveys.server.ts";
import { sharesByDay } from "#app/estimate/answered-over-time.ts";
import { frameResponse } from "#app/estimate/response-rate.ts";
import { groupBy } from "#app/lib/group-by.ts";

export type ToldRates = NonNullable<Awaited<ReturnType<typeof readResponseRates>>>;
export type RatePart = ToldRates["parts"][number];
export type Curve = NonNullable<ToldRates["curve"]>;

/**
 * Who has answered a survey in the viewer's states: the whole, its parts, and how it went from day to day, beside the same
 * survey of an earlier season.
 * @returns undefined for a survey that asks in none of the viewer's states.
 */
export async function readResponseRates(trx: Trx, viewer: Associate, surveyId: string, asked: AnsweredQuery) {
	const survey = await findSurvey(trx, viewer, surveyId);
	if (!survey) return undefined;
	const query = { ...asked, crop: survey.cropKeys.includes(asked.crop) ? asked.crop : "all" };
	const outcomes = await listOutcomes(trx, viewer, surveyId, query.crop);
	const earlier = await findEarlierSurvey(trx, viewer, surveyId);
	const before = earlier && {
		...earlier,
		outcomes: await listOutcomes(trx, viewer, earlier.surveyId, query.crop),
	};
	const rowsBefore = groupBy(before?.outcomes ?? [], partKey(query.by));
	return {
		survey: { season: survey.season, state: survey.state, timeZone: survey.timeZone, cropKeys: survey.cropKeys },
		query,
		whole: partOf(outcomes),
		dispositions: sumByDisposition(outcomes),
		parts: [...groupBy(inOrder(outcomes, query.by), partKey(query.by))].map(([key, rows]) => ({
			key,
			name: nameOf(rows[0]!),
			...partOf(rows),
			before: rowsBefore.has(key) ? partOf(rowsBefore.get(key)!) : null,
		})),
		earlier: before ? { season: before.season, whole: partOf(before.outcomes) } : null,
		curve: await readCurve(trx, viewer, query, { surveyId, season: survey.season, outcomes }, before),
	};
}

type Counted = { surveyId: string; season: number; outcomes: OutcomeRow[] };

/** Both seasons from their opening on, so that the same day of each stands beside the other. */
async function readCurve(trx: Trx, viewer: Associate, query: AnsweredQuery, now: Counted, before: Counted | undefined) {
	const told = await readSeason(trx, viewer, query, now);
	if (!told) return null;
	return { now: told, before: (before && (await readSeason(trx, viewer, query, before))) ?? null };
}

async function readSeason(trx: Trx, viewer: Associate, query: AnsweredQuery, counted: Counted) {
	const days = await findSurveyDays(trx, counted.surveyId);
	if (!days) return null;
	const rows = await listAnsweredDays(trx, viewer, counted.surveyId, query.crop);
	const amount = query.weigh === "trees" ? "bearingTrees" : "operations";
	const base = baseOf(counted.outcomes)[amount];
	const answered = rows.map((row) => ({ day: row.day, answered: row[amount] }));
	return { season: counted.season, points: sharesByDay(answered, base, days.lastDay) };
}

function partOf(rows: OutcomeRow[]) {
	const complete = rows.filter(({ disposition }) => disposition === "complete");
	return {
		asked: { operations: sum(rows, "operations"), trees: sum(rows, "bearingTrees") },
		answered: { operations: sum(complete, "operations"), trees: sum(complete, "bearingTrees") },
		response: frameResponse(rows),
	};
}

function baseOf(rows: OutcomeRow[]) {
	const eligible = rows.filter(({ disposition }) => disposition !== "not_eligible");
	return { operations: sum(eligible, "operations"), bearingTrees: sum(eligible, "bearingTrees") };
}

function sum(rows: OutcomeRow[], amount: "operations" | "bearingTrees"): number {
	return rows.reduce((total, row) => total + row[amount], 0);
}

function sumByDisposition(rows: OutcomeRow[]) {
	return [...groupBy(rows, ({ disposition }) => disposition)].map(([disposition, of]) => ({
		disposition,
		operations: sum(of, "operations"),
		bearingTrees: sum(of, "bearingTrees"),
	}));
}

const partKey = (by: AnsweredQuery["by"]) => (row: OutcomeRow) => {
	if (by === "state") return row.stateFips;
	return `${row.stateFips} ${by === "stratum" ? row.sizeClass : (row.districtKey ?? "")}`;
};

/** Parts stand in the order of their first rows; strata by size, whichever districts they are in. */
function inOrder(rows: OutcomeRow[], by: AnsweredQuery["by"]): OutcomeRow[] {
	if (by !== "stratum") return rows;
	return rows.toSorted((a, b) => a.stateFips.localeCompare(b.stateFips) || sizeOf(a) - sizeOf(b));
}

function sizeOf({ sizeClass }: OutcomeRow): number {
	return sizeClasses.indexOf(sizeClass);
}

function nameOf({ stateFips, districtName, sizeClass }: OutcomeRow) {
	return { stateFips, districtName, sizeClass };
}

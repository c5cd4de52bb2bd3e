import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import type { Measure } from "#app/collect/form.ts";
import { weighAnswers } from "#app/estimate/calibration/blocks.ts";
import { changeOfWeighed } from "#app/estimate/calibration/weighed-change.ts";
import { type CellChange, changeOfCell } from "#app/estimate/change.ts";
import { compareToSeasons, type SeasonsComparison } from "#app/estimate/seasons.ts";
import { respondentsByStratum } from "#app/estimate/strata.ts";
import { joinSeasons, twoSeasonStrata } from "#app/estimate/two-seasons.ts";
import { estimateByWeights, readWeighing } from "#app/jobs/weighed-estimates.server.ts";
import { pairsOfArea, readBothSeasons } from "#app/tally/both-seasons.server.ts";
import { type DraftInputs, measuresOf, readDraftInputs } from "./draft-estimates.server.ts";

/** Seasons that make up what is usual. */
const usualSeasons = 5;

type Place = { areaKey: string; cropKey: string; measure: Measure };
type Told = { value: number; standardError: number };

/** One figure in earlier seasons, in the measure's own unit. */
export type FigureSeasons = {
	earlier: { surveyId: string; season: number; figure: Told | null }[];
	/** From the last season, where it asked the same; differences of days are told by the mean alone. */
	change:
		(Pick<CellChange, "missing" | "respondents" | "interval"> & { since: number; difference: number | null }) | null;
	/** Beside the mean of up to five earlier seasons. */
	usual: SeasonsComparison | null;
};

/** The same figure in surveys of earlier seasons that asked by the same form, and how far it lies from them. */
export async function readFigureSeasons(
	trx: Trx,
	viewer: Associate,
	now: DraftInputs,
	place: Place,
): Promise<FigureSeasons> {
	const surveys = await listEarlierSurveys(trx, viewer, now.survey.surveyId, now.survey.season);
	const seasons = [];
	for (const { surveyId, season } of surveys) {
		const inputs = await readDraftInputs(trx, viewer, surveyId);
		const asked = inputs && measuresOf(inputs, place.cropKey).find(({ key }) => key === place.measure.key);
		const same = inputs && asked && isSameFigure(asked, place.measure);
		seasons.push({ surveyId, season, inputs: same ? inputs : null });
	}
	const figure = await figureOf(trx, now, place);
	const earlier: FigureSeasons["earlier"] = [];
	for (const { surveyId, season, inputs } of seasons)
		earlier.push({ surveyId, season, figure: inputs && (await figureOf(trx, inputs, place)) });
	const last = seasons.find(({ season }) => season === now.survey.season - 1);
	const change = last?.inputs && place.measure.kind !== "day" ? await changeSince(trx, last.inputs, now, place) : null;
	const usual =
		figure &&
		compareToSeasons(
			figure,
			earlier.map((one) => one.figure),
		);
	return { earlier, change: change && { ...change, since: now.survey.season - 1 }, usual };
}

const quotients = new Set<Measure["kind"]>(["ratio", "mean", "proportion"]);

/** A ratio, a mean and a proportion of one key are one figure: how it is told has changed, not what. */
function isSameFigure(asked: Measure, now: Measure): boolean {
	const alike = asked.kind === now.kind || (quotients.has(asked.kind) && quotients.has(now.kind));
	return alike && asked.unit === now.unit;
}

/** The latest survey of each of the last seasons that asked by the same form, the newest first. */
async function listEarlierSurveys(trx: Trx, viewer: Associate, surveyId: string, season: number) {
	return trx
		.selectFrom("collect.survey as s")
		.innerJoin("collect.form_version as v", "v.form_version_id", "s.form_version_id")
		.innerJoin("collect.survey_state as g", "g.survey_id", "s.survey_id")
		.where("g.state_fips", "in", viewer.stateFips)
		.where("v.form_id", "=", (eb) =>
			eb
				.selectFrom("collect.survey as one")
				.innerJoin("collect.form_version as w", "w.form_version_id", "one.form_version_id")
				.select("w.form_id")
				.where("one.survey_id", "=", surveyId),
		)
		.where("s.opened_at", "is not", null)
		.where("s.season", "<", season)
		.where("s.season", ">=", season - usualSeasons)
		.distinctOn("s.season")
		.orderBy("s.season", "desc")
		.orderBy("s.opened_at", "desc")
		.select(["s.survey_id as surveyId", "s.season"])
		.execute();
}

const talliesOf = (inputs: DraftInputs, { cropKey, measure }: Place) =>
	inputs.tallies.filter((tally) => tally.measureKey === measure.key && tally.cropKey === cropKey);

async function figureOf(trx: Trx, inputs: DraftInputs, place: Place): Promise<Told | null> {
	const tallies = talliesOf(inputs, place);
	const { estimates } = await estimateByWeights(trx, { ...inputs, measures: [place.measure], tallies });
	const found = estimates.find(({ areaKey }) => areaKey === place.areaKey);
	if (!found || found.value === null || found.standardError === null) return null;
	return { value: found.value, standardError: found.standardError };
}

async function changeSince(trx: Trx, before: DraftInputs, now: DraftInputs, place: Place) {
	const { areaKey, cropKey, measure } = place;
	if (measure.kind === "day") return null;
	const both = await readBothSeasons(trx, {
		before: before.survey.surveyId,
		now: now.survey.surveyId,
		measureKey: measure.key,
		cropKey,
	});
	if (before.weighting !== "design" || now.weighting !== "design")
		return weighedChange(trx, before, now, place, both.frame);
	const isInside = (countyFips: string) => now.areasOfCounty.get(countyFips)?.includes(areaKey) ?? false;
	const seasonOf = (inputs: DraftInputs) => {
		const tallies = talliesOf(inputs, place);
		return {
			frame: inputs.frame.filter((stratum) => stratum.cropKey === cropKey),
			respondents: respondentsByStratum(tallies),
			inside: tallies.filter(({ countyFips }) => isInside(countyFips)),
		};
	};
	const [first, second] = [seasonOf(before), seasonOf(now)];
	const strata = twoSeasonStrata(joinSeasons(first, second, both), {
		before: first.inside,
		now: second.inside,
		both: pairsOfArea(both.pairs, isInside),
	});
	return toldIn(measure, changeOfCell(measure.kind, strata));
}

/** By calibrated weights, where either season has them: from the answers, since tallies do not tell who answered both. */
async function weighedChange(
	trx: Trx,
	before: DraftInputs,
	now: DraftInputs,
	place: Place,
	onBothFrames: Map<string, number>,
) {
	const { areaKey, cropKey, measure } = place;
	const seasonOf = async (inputs: DraftInputs) => {
		const weighing = await readWeighing(trx, inputs, { measureKey: measure.key, cropKey });
		return { weighed: weighAnswers(weighing), frame: weighing.frame };
	};
	const isInside = (countyFips: string) => now.areasOfCounty.get(countyFips)?.includes(areaKey) ?? false;
	const [first, second] = [await seasonOf(before), await seasonOf(now)];
	const kind = measure.kind === "day" ? "ratio" : measure.kind;
	return toldIn(measure, changeOfWeighed(kind, first, second, isInside, onBothFrames));
}

function toldIn(measure: Measure, { change, missing, respondents, interval }: CellChange) {
	const scaled = (value: number) => value * measure.scale;
	return {
		missing,
		respondents,
		difference: change.difference && scaled(change.difference.value),
		interval: interval && { lower: scaled(interval.lower), upper: scaled(interval.upper) },
	};
}

import { describe, expect, test } from "vitest";
import { type WeighingInput, weighAnswers } from "#app/estimate/calibration/blocks.ts";
import { calibratedEstimate } from "#app/estimate/calibration/estimate.ts";
import { calibrateLinear } from "#app/estimate/calibration/linear.ts";
import { changeOfWeighed } from "#app/estimate/calibration/weighed-change.ts";
import { weighedFigure } from "#app/estimate/calibration/weighed-figure.ts";
import { estimateWeighed, gatherCalibrations } from "#app/estimate/calibration/weighed-survey.ts";
import { type Weighting, weightings } from "#app/collect/weighting.ts";
import { estimateSurvey } from "#app/estimate/survey.ts";
import { changeOfCell } from "#app/estimate/change.ts";
import { joinSeasons, twoSeasonStrata } from "#app/estimate/two-seasons.ts";
import { pairedMomentsOf } from "#app/lib/paired-moments.ts";
import { groupBy } from "#app/lib/group-by.ts";
import { tallyOf, type ToldAnswer } from "#app/tally/tally.ts";

type Unit = Omit<ToldAnswer, "y" | "x"> & { stateFips: string; sizeClass: number };

/** A generator of 0 to 1 that gives every run the same. */
function drawing(seed: number): () => number {
	let state = seed;
	return () => (state = (state * 48_271) % 2_147_483_647) / 2_147_483_647;
}

const countiesOf: Record<string, string[]> = { A: ["A1", "A2", "A3", "A4"], B: ["B1", "B2", "B3", "B4"] };
const districtOf = new Map<string, string | null>([
	...["A1", "A2"].map((county) => [county, "A-north"] as const),
	["A3", "A-south"],
	["A4", null],
	["B1", "B-east"],
	["B2", "B-east"],
	["B3", "B-west"],
	["B4", "B-west"],
]);
const areasOfCounty = new Map(
	[...districtOf].map(([county, district]) => [
		county,
		[county, ...(district ? [district] : []), county[0]!, "network"],
	]),
);

/** A frame of two states with three size classes each; more small operations than large. */
function frameOf(operations: number, draw: () => number): Unit[] {
	return Array.from({ length: operations }, (_, i) => {
		const stateFips = i % 2 === 0 ? "A" : "B";
		const sizeClass = [1, 1, 1, 2, 2, 3][Math.floor(draw() * 6)]!;
		const countyFips = countiesOf[stateFips]![Math.floor(draw() * 4)]!;
		const bearingTrees = Math.ceil(10 ** sizeClass * (1 + 8 * draw()));
		return {
			operationId: `o${i}`,
			countyFips,
			stateFips,
			sizeClass,
			stratumKey: `${stateFips}-${sizeClass}`,
			bearingTrees,
		};
	});
}

function inputOf(units: readonly Unit[], answers: readonly ToldAnswer[], weighting: Weighting): WeighingInput {
	const frame = [...groupBy(units, ({ stratumKey }) => stratumKey)].map(([stratumKey, [first, ...more]]) => ({
		stratumKey,
		stateFips: first!.stateFips,
		sizeClass: first!.sizeClass,
		frameSize: more.length + 1,
	}));
	const cells = [...groupBy(units, ({ countyFips, stratumKey }) => `${countyFips} ${stratumKey}`).values()].map(
		(own) => ({
			countyFips: own[0]!.countyFips,
			stratumKey: own[0]!.stratumKey,
			operations: own.length,
			bearingTrees: own.reduce((sum, { bearingTrees }) => sum + bearingTrees, 0),
		}),
	);
	return { weighting, frame, cells, answers, districtOf };
}

/** A third of the frame answered, large ones and the south less often; loss goes with size. */
function surveyOf(seed: number, operations = 600) {
	const draw = drawing(seed);
	const units = frameOf(operations, draw);
	const answers = units
		.filter(({ sizeClass, countyFips }) => draw() < 0.45 - 0.07 * sizeClass - (countyFips === "A3" ? 0.1 : 0))
		.map(({ stateFips: _s, sizeClass: _c, ...unit }): ToldAnswer => {
			const x = unit.bearingTrees * (30 + 10 * draw());
			return { ...unit, x, y: x * draw() };
		});
	return { units, answers };
}

type Placed = Pick<ToldAnswer, "countyFips" | "stratumKey">;
const districtName = ({ countyFips }: Placed) => districtOf.get(countyFips) ?? `rest of ${countyFips[0]}`;
const inDistrict = (key: string) => (one: Placed) => (districtName(one) === key ? 1 : 0);
const inStratum = (key: string) => (one: Placed) => (one.stratumKey === key ? 1 : 0);
const isInside = (county: string) => areasOfCounty.get(county)!.includes("A");
const inStrata = (answers: readonly ToldAnswer[]) => groupBy(answers, ({ stratumKey }) => stratumKey);
const isRest = ({ countyFips }: { countyFips: string }) => ["A3", "A4"].includes(countyFips);

const kinds = [
	{ key: "loss", kind: "ratio", scale: 100, unit: "percent" },
	{ key: "mean", kind: "mean", scale: 1, unit: "lb" },
	{ key: "sum", kind: "total", scale: 1, unit: "lb" },
	{ key: "share", kind: "proportion", scale: 100, unit: "percent" },
	{ key: "day", kind: "day", scale: 1, unit: "day" },
] as const;

describe("a survey by calibrated weights", () => {
	test("is by design weights what the kept tallies give, in every area and for every kind of measure", () => {
		const { units, answers: told } = surveyOf(7);
		for (const measure of kinds) {
			const answers = told.map((answer, i) => {
				if (measure.kind === "day") return { ...answer, y: 100 + (i % 23), x: 1 };
				return measure.kind === "proportion" ? { ...answer, y: i % 3 === 0 ? 1 : 0, x: 1 } : answer;
			});
			const input = inputOf(units, answers, "design");
			const tallies = [...groupBy(answers, ({ countyFips, stratumKey }) => `${countyFips} ${stratumKey}`).values()].map(
				(own) => ({
					...tallyOf(own),
					measureKey: measure.key,
					cropKey: "apple",
					countyFips: own[0]!.countyFips,
					stateFips: own[0]!.countyFips[0]!,
					stratumKey: own[0]!.stratumKey,
					setAside: 0,
					days: own.map(({ y }) => ({ value: y, n: 1 })),
				}),
			);
			const frame = input.frame.map((stratum) => ({ ...stratum, cropKey: "apple" }));
			const kept = estimateSurvey({ measures: [measure], frame, tallies, areasOfCounty });
			const weighed = estimateWeighed({ ...input, measure, cropKey: "apple", counties: [], areasOfCounty });
			expect(weighed.estimates).toHaveLength(kept.estimates.length);
			for (const estimate of weighed.estimates) {
				const other = kept.estimates.find(({ areaKey }) => areaKey === estimate.areaKey)!;
				const { value, standardError, lower, upper, ...rest } = other;
				for (const [name, number] of Object.entries({ value, standardError, lower, upper }))
					expect(estimate[name as "value"], `${measure.key} ${name}`).toBeCloseTo(number!, 6);
				expect(estimate).toMatchObject({ ...rest, cv: other.cv === null ? null : expect.closeTo(other.cv, 9) });
			}
		}
	});

	test("meets what it was calibrated to: districts, strata and bearing trees of each state", () => {
		const { units, answers } = surveyOf(11);
		const sumOf = (weights: number[], count: (answer: ToldAnswer) => number) =>
			answers.reduce((sum, answer, i) => sum + weights[i]! * count(answer), 0);
		const frameOfUnits = (count: (unit: Unit) => number) => units.reduce((sum, unit) => sum + count(unit), 0);
		const districts = ["A-north", "A-south", "rest of A", "B-east", "B-west"].map((key) => inDistrict(key));
		const strata = [1, 2, 3].flatMap((size) => ["A", "B"].map((state) => inStratum(`${state}-${size}`)));
		const trees = ["A", "B"].map(
			(state) => (one: Pick<ToldAnswer, "countyFips" | "bearingTrees">) =>
				one.countyFips.startsWith(state) ? one.bearingTrees : 0,
		);
		const meets = { post_stratified: districts, raked: [...districts, ...strata], linear: [...strata, ...trees] };
		for (const [weighting, counts] of Object.entries(meets)) {
			const { weights, designWeights, blocks } = weighAnswers(inputOf(units, answers, weighting as Weighting));
			expect(blocks.map(({ note }) => note.fallback)).toEqual([null, null]);
			for (const count of counts) expect(sumOf(weights, count) / frameOfUnits(count)).toBeCloseTo(1, 10);
			// The answers were drawn unevenly, so that design weights alone do not.
			expect(weights.some((weight, i) => Math.abs(weight / designWeights[i]! - 1) > 0.01)).toBe(true);
		}
	});

	test("knows a total that it was calibrated to without error", () => {
		const { units, answers } = surveyOf(13);
		const told = answers.map((answer) => ({ ...answer, y: answer.bearingTrees, x: 1 }));
		const weighed = weighAnswers(inputOf(units, told, "linear"));
		const inside = told.flatMap(({ countyFips }, i) => (countyFips.startsWith("A") ? [i] : []));
		const figure = weighedFigure("total", weighed, inside)!;
		const frameTrees = units.reduce((sum, unit) => sum + (unit.stateFips === "A" ? unit.bearingTrees : 0), 0);
		expect(figure.value / frameTrees).toBeCloseTo(1, 12);
		expect(figure.standardError / frameTrees).toBeLessThan(1e-9);
		expect(weighedFigure("total", weighAnswers(inputOf(units, told, "design")), inside)!.standardError).toBeGreaterThan(
			frameTrees / 100,
		);
	});

	test("is the calibrated estimate of one sample of all strata, fed by hand", () => {
		const { units, answers } = surveyOf(17);
		const weighed = weighAnswers(inputOf(units, answers, "linear"));
		const { strata } = weighed.strata;
		const sample = {
			operations: weighed.stratumOf.map((stratum, i) => ({ stratum, weight: weighed.designWeights[i]! })),
			samplingFractions: strata.map(({ respondents, frameSize }) => respondents / frameSize),
		};
		const calibration = calibrateLinear(sample, [
			...strata.map(({ stratumKeys, frameSize }, at) => ({
				name: stratumKeys.join("+"),
				values: weighed.stratumOf.map((own) => (own === at ? 1 : 0)),
				total: frameSize,
			})),
			...["A", "B"].map((state) => ({
				name: state,
				values: answers.map(({ countyFips, bearingTrees }) => (countyFips.startsWith(state) ? bearingTrees : 0)),
				total: units.reduce((sum, unit) => sum + (unit.stateFips === state ? unit.bearingTrees : 0), 0),
			})),
		]);
		for (const area of ["network", "A", "B-east", "A4"]) {
			const isIn = ({ countyFips }: ToldAnswer) => areasOfCounty.get(countyFips)!.includes(area);
			const byHand = calibratedEstimate(
				"ratio",
				sample,
				calibration,
				answers.map((answer) => (isIn(answer) ? answer : null)),
			)!;
			const inside = answers.flatMap((answer, i) => (isIn(answer) ? [i] : []));
			const figure = weighedFigure("ratio", weighed, inside)!;
			expect(figure.value).toBeCloseTo(byHand.value, 12);
			expect(figure.standardError).toBeCloseTo(byHand.standardError, 12);
		}
	});

	test("changes no weight where design weights meet the totals already", () => {
		// Each county and size has four operations, of which two answered that have half of its trees.
		const units = ["A", "B"].flatMap((stateFips) =>
			countiesOf[stateFips]!.flatMap((countyFips) =>
				[1, 2, 3].flatMap((sizeClass) =>
					[5, 9, 6, 8].map((trees, i): Unit => ({
						operationId: `${countyFips}-${sizeClass}-${i}`,
						countyFips,
						stateFips,
						sizeClass,
						stratumKey: `${stateFips}-${sizeClass}`,
						bearingTrees: trees * 10 ** sizeClass,
					})),
				),
			),
		);
		const answers = units
			.filter(({ operationId }) => /-[01]$/.test(operationId))
			.map((unit, i) => ({ ...unit, x: unit.bearingTrees, y: (unit.bearingTrees * (i % 7)) / 10 }));
		const design = weighAnswers(inputOf(units, answers, "design"));
		for (const weighting of weightings) {
			const { weights, blocks } = weighAnswers(inputOf(units, answers, weighting));
			expect(blocks.map(({ note }) => note.fallback)).toEqual([null, null]);
			for (const [i, weight] of weights.entries()) expect(weight).toBeCloseTo(design.weights[i]!, 10);
		}
	});

	test("keeps design weights and says why, in the one state where it cannot do better", () => {
		const { units, answers } = surveyOf(19);
		const few = answers.filter(({ countyFips }, i) => countyFips.startsWith("A") || i % 12 === 0);
		const [a, b] = weighAnswers(inputOf(units, few, "raked")).blocks.map(({ note }) => note);
		expect(a).toMatchObject({ stateFips: ["A"], fallback: null });
		expect(b).toMatchObject({ stateFips: ["B"], fallback: "too_few", smallest: 1, largest: 1, sweeps: null });

		const heavy = units.map((unit) =>
			answers.some(({ operationId }) => operationId === unit.operationId)
				? unit
				: { ...unit, bearingTrees: unit.bearingTrees * 40 },
		);
		const extreme = weighAnswers(inputOf(heavy, answers, "linear"));
		expect(extreme.blocks.map(({ note }) => note.fallback)).toEqual(["extreme_weights", "extreme_weights"]);
		expect(extreme.weights).toEqual(extreme.designWeights);

		const bare = units.map((unit) => ({ ...unit, bearingTrees: 0 }));
		const none = weighAnswers(
			inputOf(
				bare,
				answers.map((answer) => ({ ...answer, bearingTrees: 0 })),
				"linear",
			),
		);
		expect(none.blocks.map(({ note }) => note.fallback)).toEqual(["zero_total", "zero_total"]);
		const unseen = weighAnswers(
			inputOf(
				units,
				answers.map((answer) => ({ ...answer, bearingTrees: 0 })),
				"linear",
			),
		);
		expect(unseen.blocks.map(({ note }) => note.fallback)).toEqual([
			"group_without_respondents",
			"group_without_respondents",
		]);
	});

	test("counts a district with too few answers together with the counties of none", () => {
		const { units, answers } = surveyOf(23);
		const south = answers.filter(({ countyFips }) => countyFips === "A3");
		const thin = answers.filter((answer) => !south.slice(4).includes(answer));
		const { blocks, weights } = weighAnswers(inputOf(units, thin, "post_stratified"));
		const [a] = blocks.map(({ note }) => note);
		expect(a).toMatchObject({ takenTogether: ["A-south"], fallback: null });
		expect(a!.totals.map(({ group }) => group).toSorted()).toEqual(["A-north", "rest"]);
		const sum = thin.reduce((all, answer, i) => all + (isRest(answer) ? weights[i]! : 0), 0);
		expect(sum).toBeCloseTo(units.filter(isRest).length, 9);
	});

	test("leaves those of a stratum in which everybody answered to count once each", () => {
		const { units, answers } = surveyOf(29);
		const missing = units
			.filter(
				({ stratumKey, operationId }) =>
					stratumKey === "A-3" && !answers.some((one) => one.operationId === operationId),
			)
			.map(({ stateFips: _s, sizeClass: _c, ...unit }) => ({ ...unit, x: 1, y: 0 }));
		const all = [...answers, ...missing];
		const { weights } = weighAnswers(inputOf(units, all, "raked"));
		for (const [i, { stratumKey }] of all.entries()) if (stratumKey === "A-3") expect(weights[i]).toBe(1);
		const inA = all.reduce((sum, { countyFips }, i) => sum + (countyFips.startsWith("A") ? weights[i]! : 0), 0);
		expect(inA).toBeCloseTo(units.filter(({ stateFips }) => stateFips === "A").length, 9);
	});

	test("takes states together that had to share a stratum", () => {
		const { units, answers } = surveyOf(37);
		const lone = answers.findIndex(({ countyFips }) => countyFips.startsWith("A"));
		const { blocks, strata } = weighAnswers(
			inputOf(
				units,
				answers.filter(({ countyFips }, i) => i === lone || countyFips.startsWith("B")),
				"linear",
			),
		);
		expect(strata.joins.map(({ step }) => step)).toContain("network");
		expect(blocks.map(({ note }) => note.stateFips)).toEqual([["A", "B"]]);
	});

	test("changes between seasons as tallies say it by design weights", () => {
		const { units, answers: now } = surveyOf(41);
		const draw = drawing(43);
		const before = now
			.filter(() => draw() < 0.7)
			.map((answer) => ({ ...answer, y: answer.y * (0.5 + draw()), x: answer.x * (0.9 + 0.2 * draw()) }));
		const frame = inputOf(units, now, "design").frame;
		const onBoth = new Map(frame.map(({ stratumKey, frameSize }) => [stratumKey, frameSize]));
		const season = (answers: ToldAnswer[], weighting: Weighting) => ({
			weighed: weighAnswers(inputOf(units, answers, weighting)),
			frame,
		});
		const change = (weighting: Weighting) =>
			changeOfWeighed("ratio", season(before, weighting), season(now, weighting), isInside, onBoth);
		const tallied = (answers: ToldAnswer[]) =>
			[...inStrata(answers)].map(([stratumKey, own]) => ({ stratumKey, ...tallyOf(own) }));
		const nowOf = new Map(now.map((answer) => [answer.operationId, answer]));
		const pairs = [...inStrata(before.filter(({ countyFips }) => isInside(countyFips)))].map(([stratumKey, own]) => ({
			stratumKey,
			...pairedMomentsOf(
				own.map(({ operationId, y, x }) => {
					const later = nowOf.get(operationId)!;
					return { yBefore: y, xBefore: x, yNow: later.y, xNow: later.x };
				}),
			),
		}));
		const counts = (answers: ToldAnswer[]) =>
			new Map([...inStrata(answers)].map(([stratumKey, own]) => [stratumKey, own.length]));
		const joined = joinSeasons(
			{ frame, respondents: counts(before) },
			{ frame, respondents: counts(now) },
			{ frame: onBoth, respondents: counts(before) },
		);
		const inside = (answers: ToldAnswer[]) => tallied(answers.filter(({ countyFips }) => isInside(countyFips)));
		const kept = changeOfCell(
			"ratio",
			twoSeasonStrata(joined, { before: inside(before), now: inside(now), both: pairs }),
		);
		const design = change("design");
		expect(design.respondents).toEqual(kept.respondents);
		expect(design.change.difference!.value).toBeCloseTo(kept.change.difference!.value, 12);
		expect(design.change.difference!.standardError).toBeCloseTo(kept.change.difference!.standardError!, 12);
		expect(design.change.covariance).toBeCloseTo(kept.change.covariance!, 14);

		const linear = change("linear");
		const told = weighedFigure(
			"ratio",
			season(now, "linear").weighed,
			now.flatMap((one, i) => (isInside(one.countyFips) ? [i] : [])),
		);
		expect(linear.change.now).toEqual({ value: told!.value, standardError: told!.standardError });
		expect(linear.change.covariance).toBeGreaterThan(0);
	});

	test("is told once for measures with the same answers", () => {
		const { units, answers } = surveyOf(31);
		const input = { ...inputOf(units, answers, "raked"), cropKey: "apple", counties: [], areasOfCounty };
		const all = kinds.slice(0, 3).flatMap((measure) => estimateWeighed({ ...input, measure }).calibrations);
		expect(all).toHaveLength(6);
		expect(gatherCalibrations(all).map(({ measureKeys, stateFips }) => [measureKeys, stateFips])).toEqual([
			[["loss", "mean", "sum"], ["A"]],
			[["loss", "mean", "sum"], ["B"]],
		]);
	});
});

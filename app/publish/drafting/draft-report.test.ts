import { expect, test } from "vitest";
import type { CropCell } from "../cell.ts";
import type { ReleaseMeasure } from "../release.ts";
import { partsOf, ReportContent } from "../report.ts";
import { draftReport, type Say } from "./draft-report.ts";

const label = { en: "Loss", es: "Pérdida" };
const measure = (key: string): ReleaseMeasure => ({
	key,
	label,
	description: label,
	kind: "ratio",
	unit: "percent",
	decimals: 0,
	season: 2025,
	worse: "more",
	hue: "loss",
});
/** As the ready form has both: what a freeze took, and how many operations lost everything. */
const share = (key: string): ReleaseMeasure => ({ ...measure(key), kind: "proportion" });
const cell = (cropKey: string, areaKey: string, value: number | null): CropCell => ({
	cropKey,
	areaKey,
	areaName: areaKey,
	kind: areaKey === "network" ? "region" : "district",
	stateFips: null,
	status: value === null ? "withheld" : "shown",
	value,
	lower: value,
	upper: value,
	quartiles: null,
	steadiness: value === null ? null : "steady",
	respondentsBand: value === null ? null : "50-99",
});
const say: Say = (key, values = {}) => `${key} ${Object.values(values).join(" ")}`;
const input = {
	release: { season: 2025, title: label },
	measures: [measure("crop_loss"), share("freeze_loss"), share("total_loss")],
	cropsOf: { crop_loss: ["all", "apple", "plum"], freeze_loss: ["all"], total_loss: ["all", "apple", "plum"] },
	measure: measure("crop_loss"),
	earlier: {},
	pests: [],
	say: { en: say, es: say },
};

test("the draft leads with the worst crop, by reference, and holds no figure as a number", () => {
	const crops = [cell("all", "network", 90), cell("apple", "network", 41.5), cell("plum", "network", 62.25)];
	const districts = [cell("plum", "IA-1", 73.5), cell("plum", "IA-2", null), cell("plum", "WI-1", 21.75)];
	const draft = draftReport({ ...input, crops, districts });
	expect(ReportContent.parse(draft)).toEqual(draft);
	expect(partsOf(draft.summary.es)).toContainEqual({
		kind: "reference",
		reference: { measure: "crop_loss", crop: "plum", area: "network" },
	});
	for (const value of ["62", "41", "73", "21", "90"]) expect(JSON.stringify(draft)).not.toContain(value);
});

test("the widest differences are between shown districts; a withheld one is not named", () => {
	const districts = [cell("plum", "IA-1", 73), cell("plum", "IA-2", null), cell("plum", "WI-1", 21)];
	const draft = JSON.stringify(draftReport({ ...input, crops: [cell("plum", "network", 62)], districts }));
	expect(draft).toContain("[[crop_loss|plum|IA-1]]");
	expect(draft).toContain("[[crop_loss|plum|WI-1]]");
	expect(draft).not.toContain("IA-2");
});

test("a release in which no crop has a network figure still makes a whole draft with its cautions", () => {
	const draft = draftReport({ ...input, crops: [cell("plum", "network", null)], districts: [] });
	expect(draft.summary.en).toContain("noLead");
	expect(draft.blocks.filter(({ type }) => type === "caution")).toMatchObject([
		{ key: "damaged_fruit" },
		{ key: "frost_protection" },
		{ key: "local_advice" },
	]);
});

const day = (key: string): ReleaseMeasure => ({ ...measure(key), kind: "day", unit: "day", worse: null });

test("a release led by days tells the earliest crop in sentences of days, and other days as figures", () => {
	const days = [day("first_bloom"), day("petal_fall")];
	const crops = [cell("apple", "network", 125), cell("plum", "network", 118)];
	const cropsOf = { first_bloom: ["apple", "plum"], petal_fall: ["apple", "plum"] };
	const made = draftReport({ ...input, measures: days, cropsOf, measure: days[0]!, crops, districts: [] });
	expect(made.summary.en).toBe("Loss, lead 2025 plum [[first_bloom|plum|network]] day");
	expect(made.title.es).toBe("title 2025: Pérdida");
	expect(JSON.stringify(made.blocks)).toContain("where day");
	expect(made.blocks).toContainEqual(expect.objectContaining({ type: "chart", chart: "windows" }));
});

test("what was asked once of an operation is told of all crops, and no chart sets crops beside each other by it", () => {
	const days = [day("first_harvest"), day("last_harvest")];
	const told = { ...input, measures: [...input.measures, ...days], districts: [] };
	const cropsOf = { ...input.cropsOf, first_harvest: ["all"], last_harvest: ["all"] };
	const made = draftReport({ ...told, cropsOf, crops: [cell("all", "network", 90), cell("plum", "network", 62)] });
	expect(made.blocks).not.toContainEqual(expect.objectContaining({ chart: "windows" }));
	const figures = made.blocks.flatMap((block) => (block.type === "figure" ? [`${block.measure} ${block.crop}`] : []));
	expect(figures).toEqual(["total_loss plum", "first_harvest all", "last_harvest all"]);
	// No day is where it was worst: days have a heading of their own.
	const first = made.blocks.findIndex((block) => block.type === "figure" && block.measure === "first_harvest");
	expect(made.blocks[first - 1]).toMatchObject({ type: "heading", text: { en: expect.stringMatching(/^when/) } });
});

test("a release led by what was asked once leads with all crops together", () => {
	const once = { ...share("poor_bee_weather"), label: { en: "Poor weather for bees", es: "Mal tiempo" } };
	const unasked = { ...cell("plum", "network", null), status: "shown" as const };
	const crops = [cell("all", "network", 31), unasked];
	const districts = [cell("all", "IA-1", 73), cell("all", "WI-1", 21)];
	const earlier = { all: [{ season: 2024, cell: cell("all", "network", 60) }] };
	const cropsOf = { poor_bee_weather: ["all"] };
	const made = draftReport({ ...input, measures: [once], cropsOf, measure: once, crops, districts, earlier });
	expect(made.summary.en).toMatch(/^Poor weather for bees, leadAll 2025 all \[\[poor_bee_weather\|all\|network\]\]/);
	const charts = made.blocks.flatMap((block) => (block.type === "chart" ? [`${block.chart} ${block.crop}`] : []));
	expect(charts).toEqual(["seasons all", "areas all"]);
	expect(JSON.stringify(made)).toContain("[[poor_bee_weather|all|IA-1]]");
});

test("the widest changes come first, each with the season before and the mean of seasons where there are several", () => {
	const crops = [cell("apple", "network", 41), cell("plum", "network", 62), cell("pawpaw", "network", 9)];
	const season = (year: number, crop: string, value: number) => ({ season: year, cell: cell(crop, "network", value) });
	const earlier = {
		apple: [season(2024, "apple", 11), season(2023, "apple", 20)],
		plum: [season(2024, "plum", 60)],
		pawpaw: [season(2023, "pawpaw", 90)],
	};
	const draft = draftReport({ ...input, crops, districts: [], earlier });
	const at = draft.blocks.findIndex((block) => block.type === "heading" && block.text.en.startsWith("changed"));
	const text = draft.blocks[at + 1];
	const lines = text?.type === "text" ? text.text.en.split("\n") : [];
	expect(lines).toEqual([
		expect.stringContaining("[[crop_loss|apple|network|mean]]"),
		expect.stringMatching(/plum.*\[\[crop_loss\|plum\|network\|last\]\]/),
	]);
	expect(lines[1]).toMatch(/^- change /);
	expect(draft.blocks[at + 2]).toMatchObject({ type: "chart", chart: "seasons", crop: "apple" });
});

test("causes are drawn where the release tells them, and of pests those that most saw, with the caution on labels", () => {
	const scab = { ...measure("scab_seen"), hue: "pests" as const, kind: "proportion" as const };
	const input2 = { ...input, crops: [cell("plum", "network", 62)], districts: [] };
	const pests = [
		{ measure: scab, cell: cell("apple", "network", 30) },
		{ measure: scab, cell: cell("plum", "network", null) },
	];
	const draft = draftReport({ ...input2, measures: [...input.measures, scab], pests });
	expect(draft.blocks).toContainEqual(expect.objectContaining({ type: "chart", chart: "causes" }));
	const figures = draft.blocks.flatMap((block) => (block.type === "figure" ? [block.measure] : []));
	expect(figures).toEqual(["total_loss"]);
	const texts = JSON.stringify(draft);
	expect(texts).toContain("[[scab_seen|apple|network]]");
	expect(texts).not.toContain("[[scab_seen|plum|network]]");
	expect(draft.blocks).toContainEqual(expect.objectContaining({ type: "caution", key: "pesticide" }));
});

test("where the likely ranges of the first two overlap, the first is not told as worse for sure", () => {
	const near = [
		{ ...cell("plum", "network", 62), lower: 55, upper: 69 },
		{ ...cell("apple", "network", 58), lower: 50, upper: 66 },
	];
	const draft = draftReport({ ...input, crops: near, districts: [] });
	expect(draft.summary.en).toMatch(/^leadClose .*\[\[crop_loss\|apple\|network\]\]/);
	const apart = [near[0]!, { ...near[1]!, upper: 54 }];
	expect(draftReport({ ...input, crops: apart, districts: [] }).summary.en).toMatch(/^lead /);
});

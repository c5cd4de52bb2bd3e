import { describe, expect, test } from "vitest";
import { listOpenChecks, listRaisedChecks } from "./checks.ts";
import { listChecksToAsk } from "./checks-to-ask.ts";
import type { Answer, FormDefinition, Question } from "./form.ts";
import type { StepValues } from "./posted.ts";
import { readPostedStep } from "./posted-step.ts";
import { readWell } from "./read-well.ts";
import type { Asking, PlantingAsked } from "./steps.ts";

const words = (en: string) => ({ en, es: `${en} (es)` });
const base = { required: false, sensitive: false };
const mass = (key: string): Question => ({ ...base, key, type: "number", unitFamily: "mass", text: words(key) });
const trees: Question = {
	...base,
	key: "trees",
	type: "number",
	unitFamily: "trees",
	text: words("How many trees?"),
	label: words("Trees"),
	limits: { hardMax: 1000, softMin: 1, softMax: 500 },
};
const day = (key: string): Question => ({ ...base, key, type: "date", text: words(key) });
const form: FormDefinition = {
	key: "form",
	title: words("Form"),
	minutes: 1,
	measures: [],
	screens: [
		{
			key: "table",
			title: words("Table"),
			perPlanting: true,
			questions: [trees, mass("normal"), mass("picked")],
			checks: [
				{
					key: "far_above",
					kind: "soft",
					when: { compare: ">", question: "picked", to: { question: "normal", times: 2 } },
					question: "picked",
					message: words("More than twice."),
				},
				{
					key: "from_nothing",
					kind: "hard",
					when: {
						all: [
							{ compare: "=", question: "trees", to: { value: 0 } },
							{ compare: ">", question: "picked", to: { value: 0 } },
						],
					},
					question: "picked",
					message: words("No tree, no fruit."),
				},
			],
		},
		{
			key: "days",
			title: words("Days"),
			perPlanting: false,
			questions: [day("first"), day("last")],
			checks: [
				{
					key: "days_without_crop",
					kind: "soft",
					when: {
						all: [
							{ compare: ">", question: "first", to: { value: "2031-01-01" } },
							{ not: { any_planting: { compare: ">", question: "picked", to: { value: 0 } } } },
						],
					},
					question: "first",
					message: words("Nothing was picked."),
				},
			],
		},
	],
};
const planting = (plantingId: string): PlantingAsked => ({
	plantingId,
	cropKey: "apple",
	cultivar: "",
	bearingTrees: 40,
	plantKind: "tree",
	bushelLb: 42,
});
const plantings = [planting("p1"), planting("p2")];
const settings = { language: "en", season: 2031, today: "2031-10-20" } as const;

/** An operation that answers step by step; each step is kept as its page keeps it, unless it has problems. */
class Operation {
	answers: Answer[] = [];
	post(stepKey: string, values: StepValues) {
		const posted = readPostedStep(this.asking, stepKey, values, settings);
		if (!posted) throw new Error(`no step ${stepKey}`);
		if (posted.problems.length > 0) return posted.problems;
		const plantingId = posted.step.planting?.plantingId ?? null;
		const keys = new Set(posted.questions.map(({ key }) => key));
		const others = this.answers.filter((answer) => answer.plantingId !== plantingId || !keys.has(answer.questionKey));
		this.answers = [...others, ...posted.answers];
		return listChecksToAsk(this.asking, stepKey).map(({ key }) => key);
	}
	get asking(): Asking {
		return { definition: form, plantings, answers: this.answers };
	}
	get open() {
		return listOpenChecks(this.asking).map(({ key, step }) => `${step.key} ${key}`);
	}
}
const table = (plants: number, normal: number, picked: number): StepValues => ({
	trees: String(plants),
	normal: String(normal),
	normal_unit: "lb",
	picked: String(picked),
	picked_unit: "lb",
});
const begun = (...first: Parameters<typeof table>) => {
	const operation = new Operation();
	return { operation, asked: operation.post("planting-p1", table(...first)) };
};

describe("what raises a check", () => {
	test("answers that are odd, and none that are not", () => {
		expect(begun(40, 100, 200).asked).toEqual([]);
		expect(begun(40, 100, 201).asked).toEqual(["far_above"]);
		expect(begun(501, 100, 100).asked).toEqual(["trees_soft_max"]);
		expect(begun(0, 100, 0).asked).toEqual(["trees_soft_min"]);
	});
	test("the answers of each planting by themselves", () => {
		const { operation } = begun(40, 100, 201);
		operation.post("planting-p2", table(40, 500, 600));
		expect(operation.open).toEqual(["planting-p1 far_above"]);
		operation.post("planting-p2", table(501, 500, 1600));
		expect(operation.open).toEqual(["planting-p1 far_above", "planting-p2 far_above", "planting-p2 trees_soft_max"]);
	});
	test("no answer that is not known, refused or left out", () => {
		const operation = new Operation();
		expect(operation.post("planting-p1", { picked: "900", picked_unit: "lb" })).toEqual([]);
		expect(operation.post("planting-p1", { picked: "900 lb", normal_kind: "dont_know" })).toEqual([]);
		expect(operation.post("planting-p1", { picked_kind: "refused", normal: "1 lb" })).toEqual([]);
	});
	test("answers of all plantings, once each is known", () => {
		const { operation } = begun(40, 100, 0);
		expect(operation.post("days", { first: "2031-09-01" })).toEqual([]);
		operation.post("planting-p2", table(40, 100, 0));
		expect(operation.open).toEqual(["days days_without_crop"]);
		operation.post("planting-p2", table(40, 100, 1));
		expect(operation.open).toEqual([]);
	});
});

describe("a hard check", () => {
	test("stands beside its field in the form's words, and nothing is kept", () => {
		const { operation, asked } = begun(0, 100, 50);
		expect(asked).toEqual([{ field: "picked", code: "from_nothing", words: words("No tree, no fruit.") }]);
		expect(operation.answers).toEqual([]);
	});
	test("cannot be confirmed", () => {
		const operation = new Operation();
		expect(operation.post("planting-p1", { ...table(0, 100, 50), confirm: "from_nothing" })).toHaveLength(1);
	});
	test("waits until the boxes themselves are mended", () => {
		const operation = new Operation();
		const problems = operation.post("planting-p1", { ...table(0, 100, 50), normal: "many" });
		expect(problems).toMatchObject([{ field: "normal", code: "not_a_number" }]);
	});
});

describe("a soft check", () => {
	test("says the odd answers, in the unit they were told in", () => {
		const { operation } = begun(40, 100, 300);
		operation.post("planting-p1", { ...table(40, 0, 0), normal: "10 bu", picked: "25 bu", trees: "600" });
		expect(listChecksToAsk(operation.asking, "planting-p1")).toEqual([
			{
				key: "far_above",
				message: words("More than twice."),
				about: [
					{ label: words("normal"), shown: { kind: "quantity", value: 10, unit: "bu" } },
					{ label: words("picked"), shown: { kind: "quantity", value: 25, unit: "bu" } },
				],
			},
			{
				key: "trees_soft_max",
				message: "higher",
				about: [{ label: words("Trees"), shown: { kind: "quantity", value: 600, unit: "tree" } }],
			},
		]);
	});
	test("is asked once: confirmed, it is kept with the answer and the values it was asked about", () => {
		const { operation } = begun(40, 100, 300);
		expect(operation.post("planting-p1", { ...table(40, 100, 300), confirm: "far_above" })).toEqual([]);
		const confirmed = operation.answers.filter((answer) => answer.confirmed);
		expect(confirmed).toMatchObject([
			{ questionKey: "picked", plantingId: "p1", confirmed: [{ check: "far_above", values: [300, 100] }] },
		]);
		expect(operation.open).toEqual([]);
		expect(listRaisedChecks(operation.asking)).toMatchObject([{ key: "far_above", confirmed: true }]);
		// The same answers again, typed otherwise, ask nothing and keep what was confirmed.
		expect(operation.post("planting-p1", { ...table(40, 100, 0), picked: "300 lb" })).toEqual([]);
		expect(operation.answers.filter((answer) => answer.confirmed)).toHaveLength(1);
	});
	test("several are confirmed with one tap", () => {
		const { operation, asked } = begun(600, 100, 300);
		expect(asked).toEqual(["far_above", "trees_soft_max"]);
		expect(operation.post("planting-p1", { ...table(600, 100, 300), confirm: "far_above trees_soft_max" })).toEqual([]);
	});
	test("cannot be confirmed before it was asked, or by another's name", () => {
		const operation = new Operation();
		expect(operation.post("planting-p1", { ...table(40, 100, 300), confirm: "far_above" })).toEqual(["far_above"]);
		expect(operation.post("planting-p1", { ...table(40, 100, 300), confirm: "trees_soft_max" })).toEqual(["far_above"]);
		expect(operation.post("planting-p1", { ...table(40, 100, 300), confirm: ["", "far_above"] })).toEqual([]);
	});
	test("a changed answer is asked about again, also with the old question's tap", () => {
		const { operation } = begun(40, 100, 300);
		expect(operation.post("planting-p1", { ...table(40, 100, 400), confirm: "far_above" })).toEqual(["far_above"]);
		expect(operation.post("planting-p1", { ...table(40, 100, 400), confirm: "far_above" })).toEqual([]);
		expect(operation.post("planting-p1", table(40, 150, 400))).toEqual(["far_above"]);
		expect(operation.post("planting-p1", table(40, 100, 400))).toEqual(["far_above"]);
	});
	test("an answer that is mended is asked about no more, and what was confirmed goes with it", () => {
		const { operation } = begun(40, 100, 300);
		operation.post("planting-p1", { ...table(40, 100, 300), confirm: "far_above" });
		expect(operation.post("planting-p1", table(40, 100, 150))).toEqual([]);
		expect(operation.answers.some((answer) => "confirmed" in answer)).toBe(false);
	});
	test("and stays confirmed while the screen is typed on", () => {
		const { operation } = begun(40, 100, 300);
		operation.post("planting-p1", { ...table(40, 100, 300), confirm: "far_above" });
		const typing = { ...table(40, 100, 300), trees: "4x" };
		const read = readWell(operation.asking, "planting-p1", typing, settings);
		expect(read?.unread).toEqual(["trees"]);
		expect(read?.answers.filter(({ confirmed }) => confirmed)).toMatchObject([{ questionKey: "picked" }]);
		const changed = readWell(operation.asking, "planting-p1", { ...typing, picked: "301" }, settings);
		expect(changed?.answers.some(({ confirmed }) => confirmed)).toBe(false);
	});
	test("another screen's answer that changes opens it again", () => {
		const { operation } = begun(40, 100, 0);
		operation.post("planting-p2", table(40, 100, 0));
		operation.post("days", { first: "2031-09-01" });
		expect(operation.post("days", { first: "2031-09-01", confirm: "days_without_crop" })).toEqual([]);
		operation.post("planting-p2", table(40, 100, 1));
		expect(operation.open).toEqual([]);
		operation.post("planting-p2", { ...table(40, 100, 0), picked: "", picked_kind: "refused" });
		expect(operation.open).toEqual([]);
		operation.post("planting-p2", table(40, 100, 0));
		expect(operation.open).toEqual([]);
		operation.post("days", { first: "2031-09-02" });
		expect(operation.open).toEqual(["days days_without_crop"]);
	});
});

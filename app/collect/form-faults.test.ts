import { describe, expect, test } from "vitest";
import type { Condition } from "#app/lib/condition.ts";
import { FormDefinition, type Measure, type Question, type Screen, type Share } from "./form.ts";
import { afterHarvest } from "./forms/after-harvest.ts";

const words = { en: "Text", es: "Texto" };
const base = { text: words, required: false, sensitive: false };
const option = (key: string) => ({ key, text: words });
const scored = (key: string, score: number) => ({ ...option(key), score });
const choice = (key: string, condition?: Condition): Question => ({
	...base,
	key,
	type: "choice",
	options: [option("yes"), option("no")],
	condition,
});
const trees = (key: string, softMax?: number): Question => ({
	...base,
	key,
	type: "number",
	unitFamily: "trees",
	limits: { softMax },
});
const percent = (key: string): Question => ({ ...base, key, type: "percent" });
const day = (key: string, notBefore?: string): Question => ({ ...base, key, type: "date", notBefore });
const screen = (key: string, questions: Question[], more: Partial<Screen> = {}): Screen => ({
	key,
	title: words,
	perPlanting: false,
	questions,
	...more,
});
const is = (question: string, value: string | number = "yes"): Condition => ({ compare: "=", question, to: { value } });
const total = (numerator: Measure["numerator"]): Measure => ({
	key: "sum",
	kind: "total",
	label: words,
	description: words,
	unit: "trees",
	decimals: 0,
	worse: null,
	hue: "yield",
	numerator,
	denominator: null,
	scale: 1,
	acrossCrops: true,
	base: false,
});
const sumOf = (question: string, share?: Share) => total({ terms: [{ question, times: 1, share }] });
const faults = (screens: Screen[], measures: Measure[] = [total({ one: true })]) => {
	const parsed = FormDefinition.safeParse({ key: "form", title: words, minutes: 1, screens, measures });
	return parsed.success ? [] : parsed.error.issues.map(({ message }) => message);
};

test("a form that is ready to use has no fault", () => {
	expect(FormDefinition.safeParse(afterHarvest).error).toBeUndefined();
});

describe("conditions", () => {
	const seen = screen("first", [choice("seen")]);
	const table = screen("table", [trees("planted"), choice("sprayed")], { perPlanting: true });

	test("on earlier questions, of plantings or of the operation, are fine", () => {
		expect(faults([seen, screen("second", [choice("spread", is("seen"))])])).toEqual([]);
		expect(faults([screen("only", [choice("seen"), choice("spread", { not: is("seen", "no") })])])).toEqual([]);
		expect(faults([seen, { ...table, questions: [choice("sprayed", is("seen"))] }])).toEqual([]);
		const any: Condition = { any_planting: { all: [is("sprayed"), { any: [is("planted", 0)] }] } };
		expect(faults([table, screen("after", [choice("why")], { condition: any })])).toEqual([]);
	});

	test.each<[string, Screen[], string]>([
		["an unknown question", [screen("a", [choice("x", is("y"))])], 'the condition of "x" names no question "y"'],
		["itself", [screen("a", [choice("x", is("x"))])], 'the condition of "x" waits for "x" itself'],
		[
			"a later question",
			[screen("a", [choice("x", is("seen"))]), seen],
			'the condition of "x" waits for "seen", which is asked later',
		],
		[
			"a question that waits for it in turn",
			[screen("a", [choice("x", is("z"))]), screen("b", [choice("y", is("x"))]), screen("c", [choice("z", is("y"))])],
			'the condition of "x" waits for "z", which waits for "x"',
		],
		[
			"a screen that waits for it in turn",
			[screen("a", [choice("x", is("y"))]), screen("b", [choice("y")], { condition: is("x") })],
			'the condition of "x" waits for "y", which waits for "x"',
		],
		[
			"a question of its own screen",
			[screen("a", [choice("x"), choice("y")], { condition: is("y") })],
			'the condition of screen "a" waits for "y", which is asked later',
		],
		[
			"an answer that each planting has",
			[table, screen("after", [choice("why", is("sprayed"))])],
			'the condition of "why" asks "sprayed" of no planting: put it into any_planting',
		],
		[
			"an option that is none",
			[seen, screen("b", [choice("x", is("seen", "perhaps"))])],
			'the condition of "x" asks for "perhaps", no option of "seen"',
		],
		[
			"a number of what is a choice",
			[seen, screen("b", [choice("x", is("seen", 1))])],
			'the condition of "x" asks for "1", no option of "seen"',
		],
		[
			"a text of what is a number",
			[screen("a", [trees("n"), choice("x", is("n", "many"))])],
			'the condition of "x" compares "n" with "many"',
		],
		[
			"a number beside a day",
			[screen("a", [trees("n"), day("d"), choice("x", { compare: "<", question: "n", to: { question: "d" } })])],
			'the condition of "x" compares "n" with "d"',
		],
		[
			"twice a day",
			[
				screen("a", [
					day("c"),
					day("d"),
					choice("x", { compare: "<", question: "c", to: { question: "d", times: 2 } }),
				]),
			],
			'the condition of "x" multiplies "d", which is no number',
		],
	])("on %s are refused", (_kind, screens, message) => {
		expect(faults(screens)).toEqual([message]);
	});
});

describe("keys and options", () => {
	test.each<[string, Screen[], string]>([
		["screens", [screen("a", [choice("x")]), screen("a", [choice("y")])], 'two things are screen "a"'],
		[
			"questions",
			[screen("a", [choice("x")]), screen("b", [choice("x")])],
			'"x" names two questions, or a field beside another',
		],
		[
			"fields",
			[screen("a", [choice("x"), choice("x_unit")])],
			'"x_unit" names two questions, or a field beside another',
		],
		[
			"the form's own fields",
			[screen("a", [choice("confirm")])],
			'"confirm" names two questions, or a field beside another',
		],
		[
			"options",
			[screen("a", [{ ...base, key: "x", type: "rating", options: [option("low"), option("low")] }])],
			'two things are option of "x" "low"',
		],
		[
			"scores",
			[screen("a", [{ ...base, key: "x", type: "rating", options: [scored("low", 1), option("high")] }])],
			'"x" has a score for some of its options only',
		],
		[
			"crops",
			[
				screen("a", [
					{ ...base, key: "x", type: "several", options: [{ ...option("scab"), crops: ["apple"] }, option("other")] },
				]),
			],
			'"x" has options for some crops, and is asked of no planting',
		],
	])("%s", (_kind, screens, message) => expect(faults(screens)).toEqual([message]));

	test("of measures are there once", () => {
		const one = total({ one: true });
		expect(faults([screen("a", [choice("x")])], [one, one])).toEqual(['two things are measure "sum"']);
	});
});

const shares = (keys: string[]) => [
	screen("a", [percent("p"), trees("n")], { sumToHundred: keys }),
	screen("b", [percent("q")]),
];

describe("sums and days", () => {
	test("only percent questions of the screen make a hundred", () => {
		expect(faults(shares(["p"]))).toEqual([]);
		expect(faults(shares(["p", "n", "q", "r"]))).toEqual(
			["n", "q", "r"].map((key) => `"${key}" is no percent question of screen "a"`),
		);
	});
	test("a day comes after an earlier day of its screen", () => {
		expect(faults([screen("a", [day("c"), day("d", "c")])])).toEqual([]);
		expect(faults([screen("a", [day("d", "c"), day("c")])])).toEqual([
			'"d" comes after "c", which is no earlier date of its screen',
		]);
	});
});

const check = (key: string, when: Condition, question: string) => ({
	key,
	kind: "soft" as const,
	when,
	question,
	message: words,
});
const late = (question: string): Condition => ({ compare: "<", question, to: { question: "felled", times: 2 } });
const checked = (...checks: ReturnType<typeof check>[]) => [
	screen("table", [trees("planted"), trees("felled")], { perPlanting: true, checks }),
	screen("after", [day("seen_on"), trees("left", 9)]),
];

describe("checks", () => {
	test.each<[string, Screen[], string[]]>([
		["of one screen", checked(check("few", late("planted"), "planted")), []],
		[
			"told twice",
			checked(check("few", is("planted", 1), "planted"), check("few", late("felled"), "felled")),
			['two things are check "few"'],
		],
		[
			"named as an expected range",
			checked(check("left_soft_max", is("planted", 1), "planted")),
			['two things are check "left_soft_max"'],
		],
		[
			"on a later screen",
			checked(check("few", { all: [is("planted", 1), is("left", 1)] }, "planted")),
			['check "few" waits for "left", which is asked later'],
		],
		["on no question", checked(check("few", late("sold"), "felled")), ['check "few" names no question "sold"']],
		[
			"beside a question that they do not speak of",
			checked(check("few", is("planted", 1), "felled")),
			['check "few" stands beside "felled", which it does not speak of'],
		],
		[
			"beside a question of another screen",
			[...checked(), screen("last", [choice("why")], { checks: [check("few", is("left", 1), "left")] })],
			['check "few" stands beside "left", which it does not speak of'],
		],
	])("%s", (_kind, screens, messages) => expect(faults(screens)).toEqual(messages));
});

describe("measures", () => {
	const screens = [
		screen(
			"table",
			[
				trees("planted"),
				choice("sprayed"),
				percent("part"),
				trees("felled_of"),
				{ ...base, key: "severity", type: "rating", options: [scored("low", 1), scored("high", 3)] },
				{ ...base, key: "look", type: "rating", options: [option("poor"), option("good")] },
			],
			{ perPlanting: true },
		),
		screen("once", [percent("cause"), choice("seen")]),
	];
	test.each<[string, Measure, string[]]>([
		["a number", sumOf("planted", "cause"), []],
		["an unknown question", sumOf("felled"), ['measure "sum" names no question "felled"']],
		["a choice", sumOf("seen"), ['measure "sum" cannot sum "seen", which is no number']],
		["an unknown share", sumOf("planted", "blame"), ['measure "sum" names no question "blame"']],
		["a share that each planting has", sumOf("planted", "part"), []],
		["a share of what is known", total({ terms: [{ known: "bearing_trees", times: 1, share: "part" }] }), []],
		["how many of how many", sumOf("planted", { part: "felled_of", whole: "planted" }), []],
		["a scored rating", sumOf("planted", "severity"), []],
		["a share that is none", sumOf("planted", "sprayed"), ['"sprayed" of measure "sum" is no percent and no score']],
		["a rating without scores", sumOf("planted", "look"), ['"look" of measure "sum" is no percent and no score']],
		[
			"a part of what is no number",
			sumOf("planted", { part: "felled_of", whole: "sprayed" }),
			['measure "sum" cannot sum "sprayed", which is no number'],
		],
		[
			"what is asked once, by a share that each planting has",
			sumOf("cause", "part"),
			['measure "sum" weighs what is asked once by what each planting has'],
		],
		[
			"some crops and all together",
			{ ...sumOf("planted"), crops: ["apple"] },
			['measure "sum" is told of some crops, and cannot be told of all together'],
		],
		[
			"no base that is called one",
			{ ...sumOf("planted"), key: "base.sum" },
			['measure "base.sum" is a base quantity if and only if its key begins with "base."'],
		],
		[
			"a base that is no total",
			{ ...sumOf("planted"), key: "base.sum", base: true, kind: "mean", denominator: { one: true } },
			['measure "base.sum" is a base quantity, and no total'],
		],
		[
			"a total that is divided",
			{ ...sumOf("planted"), denominator: { one: true } },
			['measure "sum" needs a denominator if and only if it is no total'],
		],
		["a planting's choice", total({ indicator: { any_planting: is("sprayed") } }), []],
		[
			"a choice that each planting has",
			total({ indicator: is("sprayed") }),
			['measure "sum" cannot sum "sprayed": put it into any_planting'],
		],
		[
			"an unknown condition",
			total({ indicator: is("felled") }),
			['the indicator of measure "sum" names no question "felled"'],
		],
	])("of %s", (_kind, measure, messages) => expect(faults(screens, [measure])).toEqual(messages));

	test("have a denominator that is known", () => {
		const ratio: Measure = {
			...sumOf("planted"),
			kind: "ratio",
			denominator: { terms: [{ question: "x", times: 1 }] },
		};
		expect(faults(screens, [ratio])).toEqual(['measure "sum" names no question "x"']);
	});
});

test("a fault says where it is", () => {
	const screens = [screen("a", [choice("x"), choice("y", is("z"))])];
	const parsed = FormDefinition.safeParse({
		key: "form",
		title: words,
		minutes: 1,
		screens,
		measures: [total({ one: true })],
	});
	expect(parsed.error?.issues[0]?.path).toEqual(["screens", 0, "questions", 1, "condition"]);
});

const told = (codes: object) =>
	({ ...base, key: "told", type: "short_text" as const, maxLength: 200, codes }) as Question;
const several = (key: string): Question => ({
	...base,
	key,
	type: "several",
	options: [option("scab"), option("other")],
});
const lost = screen("lost", [percent("freeze"), percent("hail"), percent("rest"), trees("felled")]);
const seenOf = (perPlanting: boolean) => screen("seen", [several("pests")], { perPlanting });
const after = (codes: object, perPlanting = false) => screen("after", [told(codes)], { perPlanting });

describe("what words are counted as", () => {
	test.each<[string, Screen[]]>([
		["other shares of a screen", [lost, after({ moves: "rest", to: ["freeze", "hail"] })]],
		["options of plantings, told of plantings", [seenOf(true), after({ adds: "pests" }, true)]],
		["options of the operation, told of it", [seenOf(false), after({ adds: "pests" })]],
	])("may be %s", (_kind, screens) => expect(faults(screens)).toEqual([]));

	test.each<[string, Screen[], string]>([
		[
			"no share that is not asked",
			[lost, after({ moves: "deer", to: ["hail"] })],
			'"told" moves "deer", which is no percent question',
		],
		[
			"no number that is no share",
			[lost, after({ moves: "rest", to: ["felled"] })],
			'"told" moves to "felled", which is no other percent question of the screen of "rest"',
		],
		[
			"not what it was told for",
			[lost, after({ moves: "rest", to: ["hail", "rest"] })],
			'"told" moves to "rest", which is no other percent question of the screen of "rest"',
		],
		[
			"no share of another screen",
			[lost, screen("more", [percent("deer")]), after({ moves: "rest", to: ["deer"] })],
			'"told" moves to "deer", which is no other percent question of the screen of "rest"',
		],
		[
			"no share of the operation where each planting has words",
			[lost, after({ moves: "rest", to: ["hail"] }, true)],
			'"told" and "rest", as which it counts, are not both asked of each planting',
		],
		[
			"no options that are not asked",
			[seenOf(false), after({ adds: "mites" })],
			'"told" adds to "mites", which has no options to choose from',
		],
		[
			"no options of which one alone is chosen",
			[screen("first", [choice("seen")]), after({ adds: "seen" })],
			'"told" adds to "seen", which has no options to choose from',
		],
		[
			"no options of plantings where the operation has words",
			[seenOf(true), after({ adds: "pests" })],
			'"told" and "pests", as which it counts, are not both asked of each planting',
		],
	])("are %s", (_kind, screens, message) => {
		expect(faults(screens)).toEqual([message]);
	});
});

import type { Answer, Question } from "./form.ts";
import { postedText, type StepValues } from "./posted.ts";
import type { Reading, ToMend } from "./read-question.ts";
import { parseTypedNumber, type TypedUnit } from "./typed-number.ts";
import { fromCanonical, isUnitOf, toCanonical, unitFamilyOf, type UnitFamily, unitsFor } from "./units.ts";

type NumberQuestion = Extract<Question, { type: "number" | "percent" }>;

/** What is to be mended in a number's own box. */
const numberProblems = {
	negative: "negative",
	not_a_number: "not_a_number",
	number_unclear: "ambiguous_number",
	unit_unclear: "unit_unknown",
	unit_not_known: "unit_unknown",
	too_long: "too_long",
} as const;

/** Reads a typed number or share, in one of the units that the question's family offers. */
export function readNumber(
	question: NumberQuestion,
	text: string,
	bushelLb: number | null,
	values: StepValues,
	language: string,
): Reading {
	const family = unitFamilyOf(question);
	const typed = parseTypedNumber(text, language, { belowZero: family === "temperature" });
	if (!typed.ok) return { code: numberProblems[typed.code] };
	if (family !== undefined) return readAmount(question, family, { ...typed, text }, bushelLb, values, language);
	const goesWith = question.type === "percent" ? "percent" : "plants";
	if (typed.unit !== null && typed.unit !== goesWith) return { code: "unit_unknown" };
	if (question.type === "number" && !Number.isInteger(typed.value)) return { code: "not_whole" };
	return outside(typed.value, limitsOf(question), (limit) => limit) ?? amount(typed.value, { text });
}

/** An amount in the unit that was typed after the number, else in the one that was chosen beside the box. */
function readAmount(
	question: NumberQuestion,
	family: UnitFamily,
	typed: { text: string; value: number; unit: TypedUnit | null },
	bushelLb: number | null,
	values: StepValues,
	language: string,
): Reading {
	const chosen = postedText(values, `${question.key}_unit`);
	// A degree sign alone leaves the choice to the box beside it.
	const isBare = typed.unit === null || (typed.unit === "degrees" && family === "temperature");
	const unit = isBare ? chosen : typed.unit;
	if (unit === "") return { code: "unit_missing" };
	if (!isUnitOf(family, unit) || !unitsFor(family, bushelLb).includes(unit)) return { code: "unit_unknown" };
	const crate = unit === "crate" ? readCrate(postedText(values, `${question.key}_crate`), language) : null;
	if (crate !== null && "code" in crate) return crate;
	const sizes = { bushelLb, crateLb: crate?.crateLb ?? null };
	const value = toCanonical(typed.value, unit, sizes);
	const broken = outside(value, question.limits, (limit) => fromCanonical(limit, unit, sizes));
	return broken ?? amount(value, { text: typed.text, unit, ...crate });
}

/** Pounds from a punnet to the heaviest bin that a fork lifts. */
const crateLimits = { hardMin: 0.1, hardMax: 3000 };

/** What one of the grower's crates holds, in pounds or in kilograms where these are typed. */
function readCrate(posted: string, language: string): { crateLb: number } | ToMend {
	if (posted.trim() === "") return { box: "crate", code: "empty" };
	const typed = parseTypedNumber(posted, language);
	if (!typed.ok) return { box: "crate", code: numberProblems[typed.code] };
	if (typed.unit !== null && typed.unit !== "lb" && typed.unit !== "kg") return { box: "crate", code: "unit_unknown" };
	const crateLb = toCanonical(typed.value, typed.unit ?? "lb", { bushelLb: null, crateLb: null });
	const broken = outside(crateLb, crateLimits, (limit) => limit);
	return broken ? { ...broken, box: "crate" } : { crateLb };
}

function amount(value: number, given: NonNullable<Answer["given"]>): Reading {
	return { answer: { kind: "given", value, given } };
}

function limitsOf(question: NumberQuestion): NumberQuestion["limits"] {
	if (question.type !== "percent") return question.limits;
	const { hardMin = 0, hardMax = 100 } = question.limits ?? {};
	return { hardMin: Math.max(0, hardMin), hardMax: Math.min(100, hardMax) };
}

/** A hard limit that is broken, told in the unit that the grower uses; three decimals keep it on the right side. */
function outside(value: number, limits: NumberQuestion["limits"], shown: (limit: number) => number): ToMend | null {
	const { hardMin = -Infinity, hardMax = Infinity } = limits ?? {};
	if (value > hardMax) return { code: "too_large_limit", detail: { max: Math.floor(shown(hardMax) * 1000) / 1000 } };
	if (value < hardMin) return { code: "too_small_limit", detail: { min: Math.ceil(shown(hardMin) * 1000) / 1000 } };
	return null;
}

import type { CheckMessage, RaisedCheck } from "#app/collect/checks.ts";
import type { Answer } from "#app/collect/form.ts";
import type { AskedStep } from "#app/collect/steps.ts";
import type { Words } from "#app/lib/words.ts";
import { keyOf, type Place } from "./reviewed-answers.ts";

export const checkKinds = ["range", "sum", "logic", "unit_slip", "ratio_to_last", "like_operations"] as const;
export type CheckKind = (typeof checkKinds)[number];

/** Why answers are odd, as data: the desk says it in words. Quantities are in the kept units of their question. */
export type OddTold =
	| { why: "lower" | "higher"; limit: number; hard: boolean }
	| { why: "words"; words: Words; hard: boolean }
	| { why: "sum"; total: number }
	| { why: "days_in_order" }
	| { why: "unit"; now: number; usual: number; size: number; against: "last" | "like" }
	| { why: "ratio"; now: number; last: number; ratio: number; centre: number }
	| { why: "unlike"; value: number; median: number; used: number; score: number; perPlant: boolean; area: AreaKind };
type AreaKind = "district" | "state";

/** One oddity of a response: the check, the question it is told beside, and every answer that it speaks of. */
export type Odd = Place & {
	checkKind: CheckKind;
	checkKey: string;
	cropKey: string | null;
	about: Place[];
	told: OddTold & { confirmedByGrower?: boolean };
};

/** A cent of a percent either way, for shares like 33.33. */
const sumTolerance = 0.01 + 1e-9;

/** What the form's own checks say, those too that the grower was asked about and confirmed. */
export function oddOfRaised(raised: readonly RaisedCheck[]): Odd[] {
	return raised.map((check) => {
		const { key, message, question, about, step, confirmed } = check;
		const plantingId = step.planting?.plantingId ?? null;
		const named = about.some((one) => one.key === question.key) ? about : [question, ...about];
		return {
			checkKind: typeof message === "string" ? "range" : "logic",
			checkKey: key,
			questionKey: question.key,
			plantingId,
			cropKey: step.planting?.cropKey ?? null,
			about: named.map((one) => ({ questionKey: one.key, plantingId })),
			told: { ...toldOf(check, message), ...(confirmed && { confirmedByGrower: true }) },
		};
	});
}

function toldOf({ question, kind }: RaisedCheck, message: CheckMessage): OddTold {
	const hard = kind === "hard";
	if (typeof message !== "string") return { why: "words", words: message, hard };
	const { softMin = 0, softMax = 0 } = ("limits" in question && question.limits) || {};
	return { why: message, limit: message === "lower" ? softMin : softMax, hard };
}

/**
 * What a grower's own page would not have let pass, and paper or an older form did: numbers beyond what is possible, shares
 * that do not make a hundred, a last day before the first.
 */
export function oddOfForm(steps: readonly AskedStep[], answers: readonly Answer[]): Odd[] {
	const byPlace = new Map(answers.map((answer) => [keyOf(answer), answer.value]));
	return steps.flatMap(({ step, questions }) => {
		const plantingId = step.planting?.plantingId ?? null;
		const at = (questionKey: string): Place => ({ questionKey, plantingId });
		const shared = { plantingId, cropKey: step.planting?.cropKey ?? null };
		const valueOf = (questionKey: string) => byPlace.get(keyOf(at(questionKey)));
		const odd: Odd[] = questions.flatMap((question): Odd[] => {
			const value = valueOf(question.key);
			const own = { ...shared, questionKey: question.key, about: [at(question.key)] };
			if ((question.type === "number" || question.type === "percent") && typeof value === "number") {
				const { hardMin, hardMax } = question.limits ?? {};
				const beyond = (why: "lower" | "higher", limit: number): Odd => ({
					...own,
					checkKind: "range",
					checkKey: `${question.key}_${why}`,
					told: { why, limit, hard: true },
				});
				if (hardMin !== undefined && value < hardMin) return [beyond("lower", hardMin)];
				if (hardMax !== undefined && value > hardMax) return [beyond("higher", hardMax)];
			}
			if (question.type !== "date" || question.notBefore === undefined) return [];
			const from = valueOf(question.notBefore);
			if (typeof from !== "string" || typeof value !== "string" || value >= from) return [];
			const about = [at(question.notBefore), at(question.key)];
			return [{ ...own, about, checkKind: "logic", checkKey: `${question.key}_order`, told: { why: "days_in_order" } }];
		});
		return [...odd, ...oddSum(step.screen.sumToHundred ?? [], { ...shared, stepKey: step.screen.key }, valueOf, at)];
	});
}

function oddSum(
	keys: readonly string[],
	{ stepKey, ...shared }: { plantingId: string | null; cropKey: string | null; stepKey: string },
	valueOf: (key: string) => Answer["value"] | undefined,
	at: (key: string) => Place,
): Odd[] {
	const told = keys.filter((key) => typeof valueOf(key) === "number");
	const total = told.reduce((sum, key) => sum + Number(valueOf(key)), 0);
	if (told.length === 0 || Math.abs(total - 100) <= sumTolerance) return [];
	const about = told.map(at);
	const questionKey = about[0]!.questionKey;
	return [{ ...shared, checkKind: "sum", checkKey: `${stepKey}_sum`, questionKey, about, told: { why: "sum", total } }];
}

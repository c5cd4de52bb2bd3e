import type { Problem } from "#app/lib/parse-form.ts";
import { type CheckToAsk, listChecksToAsk } from "./checks-to-ask.ts";
import { listOpenChecks } from "./checks.ts";
import type { Question } from "./form.ts";
import { problemOf } from "./posted-step.ts";
import type { StepValues } from "./posted.ts";
import { type FilledFrom, listFilledIn, type ShowSettings, valuesOf } from "./step-values.ts";
import { type StepChanges, versionOf } from "./step-change.ts";
import { type Asking, listAsked, type Step } from "./steps.ts";

export type ShownStep = {
	step: Step;
	questions: Question[];
	values: StepValues;
	/** From where boxes are filled in that nobody has answered yet, by question. */
	filledIn: Record<string, FilledFrom>;
	/** The version of the step that is shown. */
	version: number;
	/** Its place among the steps that are asked, counted from 1. */
	number: number;
	of: number;
	previous: string | null;
	/** Odd answers that were kept and are to be confirmed or changed. */
	checks: CheckToAsk[];
	/** What of the kept answers does not go together. */
	problems: Problem[];
};

/** A step as its page shows it. @returns undefined for a step that is not asked. */
export function showStep(
	asking: Asking,
	changes: StepChanges,
	stepKey: string,
	settings: ShowSettings,
): ShownStep | undefined {
	const steps = listAsked(asking.definition, asking.plantings, asking.answers);
	const at = steps.findIndex(({ step }) => step.key === stepKey);
	const asked = steps[at];
	if (!asked) return undefined;
	return {
		...asked,
		values: valuesOf(asked.step, asked.questions, asking.answers, settings),
		filledIn: listFilledIn(asked.step, asked.questions, asking.answers, settings),
		version: versionOf(changes, stepKey),
		number: at + 1,
		of: steps.length,
		previous: steps[at - 1]?.step.key ?? null,
		checks: listChecksToAsk(asking, stepKey),
		problems: listOpenChecks(asking)
			.filter((check) => check.kind === "hard" && check.step.key === stepKey)
			.map(problemOf),
	};
}

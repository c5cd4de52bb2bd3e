import { z } from "zod";
import { type AnswerGroup, listAnswerLines } from "../answer-lines.ts";
import type { Answer, FormDefinition, Question } from "../form.ts";
import { listChecksToAsk } from "../checks-to-ask.ts";
import { readPostedStep } from "../posted-step.ts";
import type { StepValues } from "../posted.ts";
import { findHindrance, type Hindrance } from "../progress.ts";
import type { ReadSettings } from "../read-question.ts";
import { withStep } from "../replace-step.ts";
import { type ShownStep, showStep } from "../show-step.ts";
import { findStep, listAsked, type PlantingAsked } from "../steps.ts";
import type { Problem } from "#app/lib/parse-form.ts";

/** Answers as a page carries them from one screen to the next, since nothing of a try-out is kept. */
export const CarriedAnswers = z
	.array(
		z.object({
			questionKey: z.string(),
			plantingId: z.string().nullable(),
			kind: z.enum(["given", "dont_know", "refused"]),
			value: z.union([z.number(), z.string(), z.array(z.string())]).nullable(),
			given: z.object({ text: z.string(), unit: z.string().optional(), crateLb: z.number().optional() }).nullable(),
			confirmed: z.array(z.object({ check: z.string(), values: z.array(z.any()) })).optional(),
		}),
	)
	.max(5000)
	.catch([]);

export type Trying = { definition: FormDefinition; plantings: PlantingAsked[]; answers: Answer[] };
/** What a try-out shows next. */
export type Tried =
	| {
			at: "screen";
			shown: ShownStep;
			answers: Answer[];
			posted?: { values: StepValues; questions: Question[]; problems: Problem[] };
	  }
	| {
			at: "review";
			groups: AnswerGroup[];
			hindrance: Hindrance | undefined;
			answers: Answer[];
			previous: string | null;
	  }
	/** None of its screens is asked of an orchard like this. */
	| { at: "nothing" };

/** The first screen that is asked. */
export function startTrying(trying: Trying, settings: ReadSettings): Tried {
	return showAt(trying, listAsked(trying.definition, trying.plantings, trying.answers)[0]?.step.key, settings);
}

/** Takes a screen's answers as a grower's are taken, and goes on: to what is to be mended or confirmed, or to what comes next. */
export function goOn(trying: Trying, stepKey: string, values: StepValues, settings: ReadSettings): Tried {
	const posted = readPostedStep(trying, stepKey, values, settings);
	const asked = findStep(trying, stepKey);
	if (!posted || !asked) return startTrying(trying, settings);
	if (posted.problems.length > 0) {
		const tried = showAt(trying, stepKey, settings);
		const { questions, problems } = posted;
		return tried.at === "screen" ? { ...tried, posted: { values, questions, problems } } : tried;
	}
	const answers = withStep(asked, trying.answers, posted.answers, []);
	const next = { ...trying, answers };
	if (listChecksToAsk(next, stepKey).length > 0) return showAt(next, stepKey, settings);
	const steps = listAsked(next.definition, next.plantings, answers).map(({ step }) => step.key);
	return showAt(next, steps[steps.indexOf(stepKey) + 1], settings);
}

/** One screen with the answers so far; where there is none such, the review. */
export function showAt(trying: Trying, stepKey: string | undefined, { language }: ReadSettings): Tried {
	const { definition, plantings, answers } = trying;
	const shown = stepKey === undefined ? undefined : showStep(trying, {}, stepKey, { language, massUnit: "lb" });
	if (shown) return { at: "screen", shown, answers };
	const steps = listAsked(definition, plantings, answers);
	if (steps.length === 0) return { at: "nothing" };
	const groups = listAnswerLines(definition, plantings, answers);
	return { at: "review", groups, hindrance: findHindrance(trying), answers, previous: steps.at(-1)?.step.key ?? null };
}

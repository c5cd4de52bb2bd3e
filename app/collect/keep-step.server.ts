import type { Trx } from "#app/auth/scope.server.ts";
import type { Grower } from "#app/auth/viewer.ts";
import type { AnswerPlace } from "./answer-place.server.ts";
import { replaceAnswers, sameAnswers } from "./answer-rows.server.ts";
import type { Answer } from "./form.ts";
import { replacedBy } from "./replace-step.ts";
import { lockAnswering } from "./responses.server.ts";
import { afterWriting, changeOf, judgeChange, type SentChange, type StepChange } from "./step-change.ts";
import { type AskedStep, findStep } from "./steps.ts";

export type KeptStep = {
	outcome: "saved" | "unchanged" | "changed_elsewhere";
	/** The step's version as it now stands. */
	version: number;
};
type Locked = Exclude<Awaited<ReturnType<typeof lockAnswering>>, string>;
export type KeepSettings = {
	/** Without it the answers are kept whatever was changed meanwhile. */
	sent?: SentChange;
	/** Questions whose answers stay as they are, since what is typed for them cannot be read yet. */
	unread?: string[];
};

/**
 * Keeps a step's answers in place of those it held, also of questions that its own answers now rule out: they may come
 * back. The same answers again change nothing; answers given upon an older version of the step do not replace newer ones.
 * @param stepKey a step of the form for this operation. It need not be asked now: what a phone kept without signal arrives in
 *   any order, and an answer that a condition hides is left out when all is sent in.
 */
export async function keepStep(
	trx: Trx,
	viewer: Grower,
	place: AnswerPlace,
	stepKey: string,
	answers: Answer[],
	{ sent, unread = [] }: KeepSettings = {},
): Promise<KeptStep | "not_found" | "closed" | "not_started" | "step_not_found"> {
	const answering = await lockAnswering(trx, viewer, place);
	if (typeof answering === "string") return answering;
	const { response } = answering;
	const asked = findStep(answering, stepKey);
	if (!asked || !belongTo(asked, answers)) return "step_not_found";

	const held = replacedBy(asked, answering.answers, answers, unread);
	const newest = changeOf(response.stepChanges, stepKey);
	const change = sent ?? { seen: newest?.version ?? 0, changeId: null, unsure: [] };
	const verdict = judgeChange(newest, change, unread.length === 0 && sameAnswers(held, answers));
	if (verdict !== "write")
		return { outcome: verdict === "known" ? "unchanged" : verdict, version: newest?.version ?? 0 };

	const changed = await replaceAnswers(trx, response.responseId, held, answers);
	const next = afterWriting(newest, change, changed);
	if (next !== newest) await writeChange(trx, response, stepKey, next, changed);
	return { outcome: changed ? "saved" : "unchanged", version: next.version };
}

function belongTo({ step }: AskedStep, answers: Answer[]): boolean {
	const plantingId = step.planting?.plantingId ?? null;
	const ofScreen = new Set(step.screen.questions.map(({ key }) => key));
	return answers.every((answer) => answer.plantingId === plantingId && ofScreen.has(answer.questionKey));
}

async function writeChange(
	trx: Trx,
	response: Locked["response"],
	stepKey: string,
	change: StepChange,
	changed: boolean,
): Promise<void> {
	await trx
		.updateTable("collect.response")
		.set({
			draft_version: response.draftVersion + (changed ? 1 : 0),
			step_changes: JSON.stringify({ ...response.stepChanges, [stepKey]: change }),
		})
		.where("response_id", "=", response.responseId)
		.execute();
}

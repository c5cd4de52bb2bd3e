import { isDeepStrictEqual } from "node:util";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate, Grower } from "#app/auth/viewer.ts";
import { pledgeVersion } from "#app/lib/pledge.ts";
import { type AnswerPlace, findPlace } from "./answer-place.server.ts";
import { findNewestSubmission, replaceAnswers } from "./answer-rows.server.ts";
import { endEntryDraft, findEntryDraft, listOtherEntryDrafts } from "./entry-drafts.server.ts";
import type { Answer } from "./form.ts";
import { findHindrance } from "./progress.ts";
import { findAnswering, type LockedAnswering, lockAnswering, startResponse } from "./responses.server.ts";
import { afterWriting, changeOf, type StepChanges } from "./step-change.ts";
import { answersByPlace, listAllSteps, placeOf } from "./steps.ts";
import { type SentBy, type Submitted, sendIn } from "./submission.server.ts";
import { isId } from "./surveys.server.ts";

/**
 * An associate who types in what a grower told acts for that one operation, and is named as who did. The transaction stays
 * the desk's, so that its row-level security holds.
 * @returns undefined for an operation that is not asked, or not in the viewer's states.
 */
export async function actFor(trx: Trx, viewer: Associate, place: AnswerPlace): Promise<Grower | undefined> {
	if (!isId(place.surveyId) || !isId(place.operationId)) return undefined;
	const asked = await trx
		.selectFrom("collect.frame_operation")
		.select("operation_id")
		.where("survey_id", "=", place.surveyId)
		.where("operation_id", "=", place.operationId)
		.where((eb) => eb("state_fips", "=", eb.fn.any(eb.val(viewer.stateFips))))
		.executeTakeFirst();
	return asked && { role: "grower", operationIds: [place.operationId], link: null, person: viewer };
}

/** Whether answers of an operation can be typed in now: while the survey is open, and late where they were begun before. */
export async function canEnter(trx: Trx, viewer: Associate, place: AnswerPlace): Promise<boolean> {
	const grower = await actFor(trx, viewer, place);
	const found = grower && (await findPlace(trx, grower, place));
	return found !== undefined && (found.isOpen || found.isLate);
}

/**
 * What a form on one page needs: the questions, what was sent in so far, the viewer's own draft, and who else is at it.
 * Answers that the grower keeps and has not sent in are the grower's own, so that only their being there is told.
 */
export async function findEntry(trx: Trx, viewer: Associate, place: AnswerPlace) {
	const grower = await actFor(trx, viewer, place);
	const found = grower && (await findAnswering(trx, grower, place));
	if (!found) return undefined;
	const { answers: kept, response, ...answering } = found;
	const sent = response && (await findNewestSubmission(trx, response.responseId));
	return {
		...answering,
		sent: (sent?.answers ?? []).filter((answer) => !isPhoto(found, answer)),
		response: response && {
			responseId: response.responseId,
			submittedVersion: response.submittedVersion,
			submittedAt: response.lateAt ?? response.submittedAt,
			/** The grower keeps answers of which nothing, or not all, was sent in. */
			keepsUnsent: sent ? response.changedSinceSubmission : kept.length > 0,
		},
		draft: (await findEntryDraft(trx, viewer, place)) ?? null,
		others: await listOtherEntryDrafts(trx, viewer, place),
	};
}
export type Entry = NonNullable<Awaited<ReturnType<typeof findEntry>>>;

export type NewEntry = SentBy & {
	answers: Answer[];
	/** The version that had been sent in when the page was opened; 0 for none. */
	seen: number;
	/** Sends in although the grower has sent in since. */
	allTheSame: boolean;
};

/**
 * Sends in what an associate typed: one version like any other, marked with how it came and by whom. The grower can amend it
 * as long as the survey is open, and finds these answers there; what the grower kept and had not sent in stays as it is.
 * @returns `answered_meanwhile` when the grower, or another associate, has sent in since the page was opened: nothing is
 *   changed then, and the draft is kept.
 */
export async function enterAnswers(
	trx: Trx,
	viewer: Associate,
	place: AnswerPlace,
	entry: NewEntry,
): Promise<Submitted | "answered_meanwhile"> {
	const grower = await actFor(trx, viewer, place);
	const asking = grower && (await findAnswering(trx, grower, place));
	if (!asking) return "not_found";
	// Asked before anything is begun, since nothing begun is left behind by an entry that cannot be sent.
	const hindrance = findHindrance({ ...asking, answers: entry.answers });
	if (hindrance) return hindrance;
	// The pledge was read out, or stands on the paper: it is what the answers are given under.
	const started = await startResponse(trx, grower, place, { language: entry.language, pledgeVersion });
	if (started === "not_found") return started;
	const locked = await lockAnswering(trx, grower, place);
	if (typeof locked === "string") return locked;
	if (locked.response.submittedVersion !== entry.seen && !entry.allTheSame) return "answered_meanwhile";

	const newest = await findNewestSubmission(trx, locked.response.responseId);
	const before = newest?.answers ?? [];
	const photos = before.filter((answer) => isPhoto(locked, answer));
	const answers = [...entry.answers, ...photos];
	const outcome = await sendIn(trx, grower, { ...locked, answers }, entry);
	if (typeof outcome === "string" || !("receiptCode" in outcome)) return outcome;
	await keepForGrower(trx, locked, before, entry.answers);
	await endEntryDraft(trx, viewer, place);
	return outcome;
}

/**
 * Puts what was typed in where the grower finds it to amend. An answer that the grower changed and has not sent in stays; a
 * page that the grower has open learns that its step was changed elsewhere.
 */
async function keepForGrower(trx: Trx, locked: LockedAnswering, before: Answer[], typed: Answer[]): Promise<void> {
	const sent = answersByPlace(before);
	const held = locked.answers.filter((answer) => !isPhoto(locked, answer));
	const unsent = new Set(held.filter((answer) => !isDeepStrictEqual(sent.get(at(answer)), answer)).map(at));
	const old = held.filter((answer) => !unsent.has(at(answer)));
	const next = typed.filter((answer) => !unsent.has(at(answer)));
	const changed = await replaceAnswers(trx, locked.response.responseId, old, next);
	if (!changed) return;
	const { responseId, draftVersion, stepChanges } = locked.response;
	await trx
		.updateTable("collect.response")
		.set({
			draft_version: draftVersion + 1,
			step_changes: JSON.stringify(changesOf(locked, stepChanges, old, next)),
		})
		.where("response_id", "=", responseId)
		.execute();
}

function at({ questionKey, plantingId }: Answer): string {
	return placeOf(questionKey, plantingId);
}

/** The newest change of every step, with those counted up of which answers came, changed or went. */
function changesOf(locked: LockedAnswering, changes: StepChanges, old: Answer[], next: Answer[]): StepChanges {
	const [was, is] = [answersByPlace(old), answersByPlace(next)];
	const touched = listAllSteps(locked.definition, locked.plantings).filter(({ screen, planting }) =>
		screen.questions.some(({ key }) => {
			const place = placeOf(key, planting?.plantingId ?? null);
			return !isDeepStrictEqual(was.get(place), is.get(place));
		}),
	);
	const counted = touched.map(({ key }) => {
		const newest = changeOf(changes, key);
		return [key, afterWriting(newest, { seen: newest?.version ?? 0, changeId: null, unsure: [] }, true)] as const;
	});
	return { ...changes, ...Object.fromEntries(counted) };
}

function isPhoto({ definition }: Pick<LockedAnswering, "definition">, { questionKey }: Answer): boolean {
	return definition.screens.some(({ questions }) =>
		questions.some(({ key, type }) => key === questionKey && type === "photo"),
	);
}

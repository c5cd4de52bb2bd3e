import { randomUUID } from "node:crypto";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { findNewestSubmission, type Submission } from "#app/collect/answer-rows.server.ts";
import type { Answer } from "#app/collect/form.ts";
import { findSurvey, isId } from "#app/collect/surveys.server.ts";
import { queueJob } from "#app/jobs/queue.server.ts";
import { type KeptCorrection, listCorrections } from "#app/review/corrections.server.ts";
import { addCorrection, endFinding, listBatch, lockForDecision, reopenFinding } from "#app/review/decisions.server.ts";
import { type Finding, findFinding } from "#app/review/findings.server.ts";
import { holds, keyOf, placeOf, sameSaid } from "#app/review/reviewed-answers.ts";
import { writeFacts } from "#app/tally/facts.server.ts";

export type FindingPlace = { surveyId: string; findingId: string };
/** What an associate decided of an open finding; `answer` is what a correction puts in the place of the grower's. */
export type Closing =
	| { act: "confirm"; version: number; words: string }
	| {
			act: "correct";
			version: number;
			at: number;
			seen: number;
			reason: string;
			answer: Pick<Answer, "kind" | "value" | "given">;
	  }
	| { act: "set_aside"; version: number; at: number; seen: number; reason: string }
	| { act: "reopen"; version: number };
/**
 * `done` also where the same person had done the same before: pressed twice, it says the same. `changed` tells that
 * somebody else was there first, or the grower answered anew: nothing was kept of what was sent.
 */
export type Decided = "done" | "changed" | "same_answer" | "not_found";

const outcomes = { confirm: "confirmed", correct: "corrected", set_aside: "set_aside" } as const;

/** Decides one finding, with what follows for answers, facts and tallies, all of it or nothing. */
export async function decideFinding(
	trx: Trx,
	viewer: Associate,
	{ surveyId, findingId }: FindingPlace,
	closing: Closing,
): Promise<Decided> {
	const finding = await holdFinding(trx, viewer, { surveyId, findingId });
	if (!finding) return "not_found";
	if (finding.version !== closing.version) return (await isSame(trx, finding, viewer, closing)) ? "done" : "changed";
	if (closing.act === "reopen") return reopen(trx, viewer, finding, surveyId);
	if (finding.outcome !== null) return "changed";
	if (closing.act === "confirm") {
		await endFinding(trx, viewer, finding, { outcome: "confirmed", words: closing.words });
		return "done";
	}
	const decided = await putCorrection(trx, viewer, finding, closing);
	if (decided !== "done") return decided;
	await endFinding(trx, viewer, finding, { outcome: outcomes[closing.act], words: closing.reason });
	await takeIn(trx, surveyId, finding.responseId);
	return "done";
}

/** The finding as it stands once whoever was before has ended. */
async function holdFinding(trx: Trx, viewer: Associate, { surveyId, findingId }: FindingPlace) {
	if (!isId(findingId) || !(await findSurvey(trx, viewer, surveyId))) return undefined;
	const seen = await findFinding(trx, viewer, surveyId, findingId);
	if (!seen) return undefined;
	await lockForDecision(trx, surveyId, seen.responseId);
	return findFinding(trx, viewer, surveyId, findingId);
}

/** The same press once more. Another value from a second window of the same person is not that: it was not kept. */
async function isSame(trx: Trx, finding: Finding, viewer: Associate, closing: Closing): Promise<boolean> {
	if (finding.version !== closing.version + 1) return false;
	if (closing.act === "reopen") return finding.outcome === null;
	if (finding.closedById !== viewer.personId || finding.outcome !== outcomes[closing.act]) return false;
	if (closing.act === "confirm") return true;
	const place = finding.about[closing.at];
	const newest = place && (await findNewest(trx, finding.responseId, place));
	if (!newest || newest.editFindingId !== finding.findingId) return false;
	const { answer } = newest;
	return closing.act === "set_aside" || (answer !== null && "kind" in answer && sameSaid(closing.answer, answer));
}

async function findNewest(trx: Trx, responseId: string, place: Parameters<typeof keyOf>[0]) {
	return (await listCorrections(trx, responseId)).find((one) => keyOf(one) === keyOf(place));
}

async function putCorrection(
	trx: Trx,
	viewer: Associate,
	finding: Finding,
	closing: Extract<Closing, { at: number }>,
): Promise<Decided> {
	const { responseId, findingId } = finding;
	const place = finding.about[closing.at];
	if (!place) return "not_found";
	const newest = await findNewest(trx, responseId, place);
	const submission = await findNewestSubmission(trx, responseId, "counted");
	const own = submission?.answers.find((one) => keyOf(one) === keyOf(place));
	if (!own || (newest?.number ?? 0) !== closing.seen || !sameSaid(standingAnswer(own, newest), place)) return "changed";
	if (closing.act === "correct" && sameSaid(closing.answer, place)) return "same_answer";
	await addCorrection(trx, viewer, {
		responseId,
		questionKey: place.questionKey,
		plantingId: place.plantingId,
		editFindingId: findingId,
		act: closing.act === "correct" ? "corrected" : "set_aside",
		was: own,
		answer: closing.act === "correct" ? closing.answer : null,
		reason: closing.reason,
	});
	return "done";
}

/** What counts at a place: a correction of the grower's answer, while that is what the grower says. */
function standingAnswer(own: Answer, newest: KeptCorrection | undefined) {
	const { act, answer } = newest && holds(newest, own) ? newest : {};
	return act === "corrected" && answer && "kind" in answer ? answer : own;
}

async function reopen(trx: Trx, viewer: Associate, finding: Finding, surveyId: string): Promise<Decided> {
	const { outcome, responseId, findingId } = finding;
	if (outcome !== "confirmed" && outcome !== "corrected" && outcome !== "set_aside") return "changed";
	const submission = await findNewestSubmission(trx, responseId, "counted");
	const undone = await takeBack(trx, viewer, { responseId, findingId }, submission);
	await reopenFinding(trx, viewer, finding);
	if (undone) await takeIn(trx, surveyId, responseId);
	return "done";
}

/** The grower's own answers come back where this finding put others, unless something else was decided since. */
async function takeBack(
	trx: Trx,
	viewer: Associate,
	{ responseId, findingId }: { responseId: string; findingId: string },
	submission: Submission | undefined,
): Promise<boolean> {
	const ours = (await listCorrections(trx, responseId)).filter(
		({ editFindingId, act }) => editFindingId === findingId && act !== "own",
	);
	for (const one of ours) {
		const own = submission?.answers.find((answer) => keyOf(answer) === keyOf(one));
		await addCorrection(trx, viewer, {
			responseId,
			...placeOf(one),
			editFindingId: findingId,
			act: "own",
			was: own ?? one.was,
			answer: null,
			reason: "",
		});
	}
	return ours.length > 0;
}

/** Facts, and with them the tallies, follow at once; what is odd now is looked for by queued work. */
export async function takeIn(trx: Trx, surveyId: string, responseId: string): Promise<void> {
	await writeFacts(trx, responseId);
	await queueJob(trx, "check_answers", { surveyId, responseId }, { jobKey: `check_answers:${responseId}` });
}

/** Confirms what is still open of the chosen findings. @returns how many, and what names them for undoing. */
export async function confirmChosen(trx: Trx, viewer: Associate, surveyId: string, chosen: readonly string[]) {
	if (!(await findSurvey(trx, viewer, surveyId))) return "not_found" as const;
	const batchId = randomUUID();
	let confirmed = 0;
	// Always in the same order, so that two who confirm at once do not wait for each other in a ring.
	for (const finding of await inLockOrder(trx, viewer, surveyId, chosen)) {
		await lockForDecision(trx, surveyId, finding.responseId);
		const held = await findFinding(trx, viewer, surveyId, finding.findingId);
		if (!held || held.outcome !== null) continue;
		await endFinding(trx, viewer, held, { outcome: "confirmed", words: "" }, batchId);
		confirmed += 1;
	}
	return { batchId, confirmed, left: chosen.length - confirmed };
}

/** Opens again what was confirmed at once, as far as nobody has touched it since. */
export async function undoBatch(trx: Trx, viewer: Associate, surveyId: string, batchId: string) {
	if (!(await findSurvey(trx, viewer, surveyId))) return "not_found" as const;
	const ids = await listBatch(trx, viewer, batchId);
	let reopened = 0;
	for (const finding of await inLockOrder(trx, viewer, surveyId, ids)) {
		await lockForDecision(trx, surveyId, finding.responseId);
		const held = await findFinding(trx, viewer, surveyId, finding.findingId);
		if (held?.outcome !== "confirmed") continue;
		await reopenFinding(trx, viewer, held);
		reopened += 1;
	}
	return { reopened };
}

async function inLockOrder(trx: Trx, viewer: Associate, surveyId: string, ids: readonly string[]): Promise<Finding[]> {
	const findings: Finding[] = [];
	for (const id of new Set(ids)) {
		const finding = isId(id) ? await findFinding(trx, viewer, surveyId, id) : undefined;
		if (finding) findings.push(finding);
	}
	return findings.toSorted((a, b) => (a.responseId < b.responseId ? -1 : a.responseId > b.responseId ? 1 : 0));
}

import { type RawBuilder, sql } from "kysely";
import { scopedTransaction, type Trx } from "#app/auth/scope.server.ts";
import { findNewestSubmission, type Submission } from "#app/collect/answer-rows.server.ts";
import { listRaisedChecks } from "#app/collect/checks.ts";
import type { Answer, FormDefinition } from "#app/collect/form.ts";
import { findSurveyForm } from "#app/collect/forms.server.ts";
import { listAsked, type PlantingAsked } from "#app/collect/steps.ts";
import { listPlantingsSent } from "#app/collect/submission-view.server.ts";
import { listCorrections, type KeptCorrection } from "#app/review/corrections.server.ts";
import { type Odd, oddOfForm, oddOfRaised } from "#app/review/odd-answers.ts";
import { keyOf, reviewAnswers, holds } from "#app/review/reviewed-answers.ts";
import { saveFindings } from "#app/review/save-findings.server.ts";
import { type Checking, findAnswered, listAnswered, prepareChecking, type Answered } from "./check-neighbors.server.ts";
import { queueJob } from "./queue.server.ts";
import { weighOdd } from "./weigh-odd.server.ts";

const network = { kind: "network" } as const;

/**
 * Looks for what is odd about one response, or about every one of a survey, and brings the queue of findings to it. Beside
 * the form's own checks each answer is held against the operation's last season and against like operations, as all of
 * them stand now; so the whole survey is gone through again now and then.
 */
export async function checkAnswers({ surveyId, responseId }: { surveyId: string; responseId: string | null }) {
	// Without the survey in hand, a rehearsal's answers would not be found.
	const scope = { kind: "network", surveyId } as const;
	const found = await scopedTransaction(scope, async (trx) => {
		const definition = await findSurveyForm(trx, surveyId);
		const answered = responseId === null ? await listAnswered(trx, surveyId) : await findAnswered(trx, responseId);
		if (!definition || answered.length === 0) return null;
		return { answered, checking: await prepareChecking(trx, surveyId, definition, answered) };
	});
	if (!found) return;
	// One transaction a response: a survey's growers go on answering meanwhile.
	for (const one of found.answered) await scopedTransaction(scope, (trx) => checkResponse(trx, one, found.checking));
}

/** How long after its closing a survey's answers are still gone through. */
const checkedDays = 120;

/** Queues every survey that is out, or was lately, to be gone through. */
export function checkSurveys(): Promise<void> {
	return queueSurveys(sql<boolean>`true`);
}

/** What a worker does when it starts: answers that were there before anything looked for odd ones are gone through. */
export function checkUnchecked(): Promise<void> {
	return queueSurveys(sql<boolean>`not exists (select from collect.edit_finding f
		join collect.response r using (response_id) where r.survey_id = s.survey_id)`);
}

async function queueSurveys(which: RawBuilder<boolean>): Promise<void> {
	await scopedTransaction(network, async (trx) => {
		const surveys = await trx
			.selectFrom("collect.survey as s")
			.select("s.survey_id as surveyId")
			.where("s.opened_at", "is not", null)
			.where(sql<boolean>`coalesce(s.closed_at, s.closes_at) > now() - make_interval(days => ${checkedDays})`)
			.where(which)
			.execute();
		for (const { surveyId } of surveys) await queueSurveyCheck(trx, surveyId);
	});
}

export function queueSurveyCheck(trx: Trx, surveyId: string): Promise<void> {
	return queueJob(trx, "check_answers", { surveyId, responseId: null }, { jobKey: `check_answers:${surveyId}` });
}

async function checkResponse(trx: Trx, answered: Answered, checking: Checking): Promise<void> {
	const { responseId } = answered;
	const locked = await trx
		.selectFrom("collect.response")
		.select("submitted_at")
		.where("response_id", "=", responseId)
		.forUpdate()
		.executeTakeFirst();
	const submission = locked?.submitted_at ? await findNewestSubmission(trx, responseId, "counted") : undefined;
	if (!submission) return saveFindings(trx, responseId, [], []);
	const corrections = await listCorrections(trx, responseId);
	const { definition } = checking;
	const { answers, setAside } = reviewAnswers(definition, submission.answers, corrections);
	const gone = new Set(setAside.map(keyOf));
	const counted = answers.filter((answer) => !gone.has(keyOf(answer)));
	const plantings = await listPlantingsSent(trx, submission);
	const odd = [...oddOfAnswers(definition, plantings, counted), ...checking.oddQuantities(answered, plantings)];
	const open = odd.filter(notDecided(submission, corrections, await listDecided(trx, responseId)));
	await saveFindings(trx, responseId, await weighOdd(trx, checking, answered, open), counted);
}

function oddOfAnswers(definition: FormDefinition, plantings: PlantingAsked[], answers: Answer[]): Odd[] {
	const raised = listRaisedChecks({ definition, plantings, answers });
	return [...oddOfRaised(raised), ...oddOfForm(listAsked(definition, plantings, answers), answers)];
}

type Decided = { editFindingId: string; checkKey: string };

function listDecided(trx: Trx, responseId: string): Promise<Decided[]> {
	return trx
		.selectFrom("collect.edit_finding")
		.where("response_id", "=", responseId)
		.where("outcome", "=", "corrected")
		.select(["edit_finding_id as editFindingId", "check_key as checkKey"])
		.execute();
}

/** Who corrected an answer because of a check has looked at what stands there now: the same check does not ask again. */
function notDecided(submission: Submission, corrections: readonly KeptCorrection[], decided: readonly Decided[]) {
	const own = new Map(submission.answers.map((answer) => [keyOf(answer), answer]));
	const checkOf = new Map(decided.map(({ editFindingId, checkKey }) => [editFindingId, checkKey]));
	const corrected = corrections.filter(
		(correction) => correction.act === "corrected" && holds(correction, own.get(keyOf(correction))),
	);
	return ({ checkKey, about }: Odd) =>
		!corrected.some(
			(correction) =>
				checkOf.get(correction.editFindingId ?? "") === checkKey &&
				about.some((place) => keyOf(place) === keyOf(correction)),
		);
}

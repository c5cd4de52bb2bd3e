import { sql } from "kysely";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Grower } from "#app/auth/viewer.ts";
import type { Submission } from "./answer-rows.server.ts";
import { FormDefinition, type Question } from "./form.ts";
import { erasePhotos } from "./photo-rows.server.ts";
import { replacePersonalLinks } from "./personal-link.server.ts";
import { withdrawAnswer } from "./withdrawal.server.ts";

/**
 * Takes out of what was collected all by which a leaving grower could be known. Answers on which no release rests are
 * withdrawn and emptied, also those that came late beside counted ones; the others lose their free texts. Photos go from
 * all. Surveys that are open count a refusal, and no link works any more. The caller knows that the operation is the viewer's.
 */
export async function forgetAnswers(trx: Trx, viewer: Grower, operationId: string): Promise<void> {
	// Nobody who leaves is named in the log of what follows from it.
	await trx.deleteFrom("collect.contact").where("operation_id", "=", operationId).execute();
	await trx.deleteFrom("collect.entry_draft").where("operation_id", "=", operationId).execute();
	const unnamed: Grower = { ...viewer, person: null };
	for (const { surveyId, isOpen, responseId, definition } of await listAsked(trx, operationId)) {
		const place = { surveyId, operationId };
		const withdrawn = await withdrawAnswer(trx, unnamed, place);
		if (isOpen) await countAsRefused(trx, place);
		await replacePersonalLinks(trx, place);
		if (responseId === null) continue;
		await erasePhotos(trx, responseId);
		await trx.updateTable("collect.late_decision").set({ reason: "" }).where("response_id", "=", responseId).execute();
		if (withdrawn === "released") await dropTexts(trx, responseId, textKeys(FormDefinition.parse(definition)));
		else await emptyResponse(trx, responseId);
	}
}

/** Always in the same order, so that two who leave at once do not wait for each other in a ring. */
function listAsked(trx: Trx, operationId: string) {
	return trx
		.selectFrom("collect.frame_operation as f")
		.innerJoin("collect.survey as s", "s.survey_id", "f.survey_id")
		.innerJoin("collect.form_version as v", "v.form_version_id", "s.form_version_id")
		.leftJoin("collect.response as r", (join) =>
			join.onRef("r.survey_id", "=", "f.survey_id").onRef("r.operation_id", "=", "f.operation_id"),
		)
		.where("f.operation_id", "=", operationId)
		.select(["s.survey_id as surveyId", "r.response_id as responseId", "v.definition"])
		.select(sql<boolean>`s.closed_at is null and s.closes_at > now()`.as("isOpen"))
		.orderBy("s.survey_id")
		.execute();
}

const ownWords = new Set<Question["type"]>(["short_text", "long_text", "photo"]);

/** Questions that are answered in a grower's own words or pictures. */
function textKeys({ screens }: FormDefinition): string[] {
	return screens.flatMap(({ questions }) => questions.filter(({ type }) => ownWords.has(type)).map(({ key }) => key));
}

async function countAsRefused(trx: Trx, place: { surveyId: string; operationId: string }): Promise<void> {
	await trx
		.updateTable("collect.frame_operation")
		.set({ disposition: "refused", disposition_at: sql`now()` })
		.where("survey_id", "=", place.surveyId)
		.where("operation_id", "=", place.operationId)
		.where("disposition", "in", ["partial", "reached", "not_reached", "undeliverable"])
		.execute();
}

const nothing: Submission = { plantings: [], answers: [] };

async function dropTexts(trx: Trx, responseId: string, keys: string[]): Promise<void> {
	const isLate = await trimSubmissions(trx, responseId, ({ plantings, answers }, late) =>
		late ? nothing : { plantings, answers: answers.filter(({ questionKey }) => !keys.includes(questionKey)) },
	);
	// The newest answers are then the late ones; what was counted is in its submission.
	await trx
		.deleteFrom("collect.answer")
		.where("response_id", "=", responseId)
		.$if(!isLate, (rows) => rows.where((eb) => eb("question_key", "=", eb.fn.any(eb.val(keys)))))
		.execute();
}

async function emptyResponse(trx: Trx, responseId: string): Promise<void> {
	await trx.deleteFrom("collect.answer").where("response_id", "=", responseId).execute();
	await trimSubmissions(trx, responseId, () => nothing);
}

/** @returns whether any of them came late. */
async function trimSubmissions(
	trx: Trx,
	responseId: string,
	trim: (sent: Submission, late: boolean) => Submission,
): Promise<boolean> {
	const rows = await trx
		.selectFrom("collect.submission")
		.select(["version", "answers", "late"])
		.where("response_id", "=", responseId)
		.execute();
	for (const { version, answers, late } of rows) {
		await trx
			.updateTable("collect.submission")
			.set({ answers: JSON.stringify(trim(answers as Submission, late)) })
			.where("response_id", "=", responseId)
			.where("version", "=", version)
			.execute();
	}
	await trx.updateTable("collect.response").set({ step_changes: "{}" }).where("response_id", "=", responseId).execute();
	return rows.some(({ late }) => late);
}

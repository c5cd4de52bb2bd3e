import { sql } from "kysely";
import { logEvent } from "#app/auth/event-log.server.ts";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Grower } from "#app/auth/viewer.ts";
import type { Words } from "#app/lib/words.ts";
import { type AnswerPlace, findPlace, holdSurvey } from "./answer-place.server.ts";
import {
	findNewestSubmission,
	listAnswers,
	listCrates,
	listPlantingsAsked,
	sameAnswers,
} from "./answer-rows.server.ts";
import { type Answer, FormDefinition } from "./form.ts";
import { listEarlierAnswers } from "./earlier-answers.server.ts";
import type { EarlierAnswer } from "./step-values.ts";
import type { StepChanges } from "./step-change.ts";
import { keptAnswers, type PlantingAsked } from "./steps.ts";
import type { MassUnit } from "./units.ts";

export type { AnswerPlace };
export type Answering = {
	surveyId: string;
	operationId: string;
	operationName: string;
	/** County and state are those of the frozen frame, under which the answers count. */
	countyName: string;
	stateFips: string;
	timeZone: string;
	season: number;
	title: Words;
	definition: FormDefinition;
	opensAt: Date;
	closesAt: Date;
	isOpen: boolean;
	/** Whether it closed after it was begun, and not long ago: what is sent in now is kept as late. */
	isLate: boolean;
	/** Whether the survey is only tried out, and the operation invented. */
	isRehearsal: boolean;
	massUnit: MassUnit;
	/** Pounds that the operation's crate holds, by crop, as it last told, in this survey or an earlier one. */
	crates: Record<string, number>;
	/** The operation's own, for a visitor who has not chosen one. */
	language: "en" | "es";
	plantings: PlantingAsked[];
	response: ResponseSoFar | null;
	answers: Answer[];
	/** What earlier seasons' answers fill in. */
	earlier: EarlierAnswer[];
};
export type ResponseSoFar = {
	responseId: string;
	pledgeVersion: string;
	draftVersion: number;
	stepChanges: StepChanges;
	submittedVersion: number;
	receiptCode: string | null;
	submittedAt: Date | null;
	/** When it was sent in after the closing, if it was. */
	lateAt: Date | null;
	/** Whether what would be sent in now differs from what was sent in last. */
	changedSinceSubmission: boolean;
};

/**
 * What an operation is asked in a survey and what it has answered so far.
 * @returns undefined when the operation is not the viewer's or not in the survey's frame, the survey was never opened, or
 *   a personal link is for another survey or operation.
 */
export async function findAnswering(trx: Trx, viewer: Grower, place: AnswerPlace): Promise<Answering | undefined> {
	const row = await findPlace(trx, viewer, place);
	if (!row) return undefined;
	const definition = FormDefinition.parse(row.definition);
	const answers = row.response ? await listAnswers(trx, row.response.responseId) : [];
	const plantings = await listPlantingsAsked(trx, place, answers);
	const newest = row.response ? await findNewestSubmission(trx, row.response.responseId) : undefined;
	const changed = newest !== undefined && !sameAnswers(newest.answers, keptAnswers(definition, plantings, answers));
	return {
		...row,
		surveyId: place.surveyId,
		operationId: place.operationId,
		definition,
		plantings,
		crates: await listCrates(trx, place.operationId),
		response: row.response && { ...row.response, changedSinceSubmission: changed },
		answers,
		earlier: await listEarlierAnswers(trx, place, { season: row.season, definition, plantings }),
	};
}

/**
 * Takes the response to a survey that is open, or closed while it was answered for writing until the transaction ends, and reads it as it then stands: two taps at
 * once meet here, and the second sees what the first did.
 */
export async function lockAnswering(trx: Trx, viewer: Grower, place: AnswerPlace) {
	const held = await holdSurvey(trx, viewer, place);
	if (typeof held === "string") return held;
	await trx
		.selectFrom("collect.response")
		.select("response_id")
		.where("survey_id", "=", place.surveyId)
		.where("operation_id", "=", place.operationId)
		.forUpdate()
		.execute();
	const answering = await findAnswering(trx, viewer, place);
	if (!answering?.isOpen && !answering?.isLate) return "closed" as const;
	return answering.response ? { ...answering, response: answering.response } : ("not_started" as const);
}

export type LockedAnswering = Exclude<Awaited<ReturnType<typeof lockAnswering>>, string>;

/** Agrees to the pledge and begins. Again changes nothing: the promise of the first time is the one that holds. */
export async function startResponse(
	trx: Trx,
	viewer: Grower,
	place: AnswerPlace,
	{ language, pledgeVersion }: { language: "en" | "es"; pledgeVersion: string },
): Promise<"started" | "already_started" | "not_found" | "closed"> {
	const held = await holdSurvey(trx, viewer, place);
	if (typeof held === "string") return held;
	if (!held.isOpen) return "closed";
	const { surveyId, operationId } = place;
	const begun = await trx
		.insertInto("collect.response")
		.values({
			survey_id: surveyId,
			operation_id: operationId,
			state_fips: held.stateFips,
			language,
			pledge_version: pledgeVersion,
		})
		.onConflict((conflict) => conflict.constraint("response_once").doNothing())
		.returning("response_id")
		.executeTakeFirst();
	if (!begun) return "already_started";
	await trx
		.updateTable("collect.frame_operation")
		.set({ disposition: "partial", disposition_at: sql`now()` })
		.where("survey_id", "=", surveyId)
		.where("operation_id", "=", operationId)
		.where("disposition", "in", ["reached", "not_reached", "undeliverable"])
		.execute();
	await logEvent(trx, {
		personId: viewer.person?.personId ?? null,
		action: "response.started",
		subjectKind: "response",
		subjectId: begun.response_id,
		stateFips: held.stateFips,
		detail: { surveyId, operationId, pledgeVersion, byLink: viewer.link !== null },
	});
	return "started";
}

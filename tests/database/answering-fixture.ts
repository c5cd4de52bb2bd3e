import { sql } from "kysely";
import type { Client } from "pg";
import { scopedTransaction, type Trx } from "#app/auth/scope.server.ts";
import type { Associate, Grower } from "#app/auth/viewer.ts";
import type { StepValues } from "#app/collect/posted.ts";
import { keepStep } from "#app/collect/keep-step.server.ts";
import { type AnswerPlace, findAnswering, startResponse } from "#app/collect/responses.server.ts";
import { readPostedStep } from "#app/collect/posted-step.ts";
import { listSteps } from "#app/collect/steps.ts";
import { submitResponse } from "#app/collect/submission.server.ts";
import { openSurvey } from "#app/collect/survey-opening.server.ts";
import { createSurvey } from "#app/collect/surveys.server.ts";
import { addOperation, asDesk, draftOf, type NewOperation } from "./surveys-fixture.ts";

export type NewPlanting = { crop: string; trees?: number; cultivar?: string; removedOn?: string };

export async function addPlanting(owner: Client, operationId: string, planting: NewPlanting): Promise<string> {
	const { rows } = await owner.query(
		`insert into directory.planting (operation_id, crop_key, cultivar, bearing_trees, removed_on)
		values ($1, $2, $3, $4, $5) returning planting_id`,
		[operationId, planting.crop, planting.cultivar ?? "", planting.trees ?? 40, planting.removedOn ?? null],
	);
	return rows[0].planting_id as string;
}

/** A grower who is signed in for these operations. */
export const growerOf = (...operationIds: string[]): Grower => ({
	role: "grower",
	operationIds,
	link: null,
	person: null,
});

/** A grower who came by a personal link. */
export const linkOf = (place: AnswerPlace): Grower => ({
	role: "grower",
	operationIds: [place.operationId],
	link: { personalLinkId: "00000000-0000-4000-8000-000000000000", ...place },
	person: null,
});

/** A transaction as the grower's guard opens it. */
export function asGrower<T>(viewer: Grower, work: (trx: Trx) => Promise<T>): Promise<T> {
	return scopedTransaction({ kind: "grower", operationIds: viewer.operationIds }, work);
}

export async function addSurvey(associate: Associate, open = true, season = 2031): Promise<string> {
	const draft = draftOf(["19"], { crops: ["apple", "plum", "hazelnut"], season });
	return asDesk(associate, async (trx) => {
		const { surveyId } = (await createSurvey(trx, associate, draft)) as { surveyId: string };
		if (open && (await openSurvey(trx, associate, surveyId)) !== "opened") throw new Error("the survey did not open");
		return surveyId;
	});
}

/** Closed, and so long ago that late answers are not taken either. */
export function closeLongAgo(owner: Client, surveyId: string) {
	return owner.query("update collect.survey set closed_at = now() - interval '15 days' where survey_id = $1", [
		surveyId,
	]);
}

/** An operation with an apple planting and more, asked by an open survey of its own, which it has begun to answer. */
export async function askGrower(
	owner: Client,
	associate: Associate,
	{ more = [], begin = true, ...given }: { more?: NewPlanting[]; begin?: boolean } & Partial<NewOperation> = {},
) {
	const operationId = await addOperation(owner, { state: "19", ...given });
	const { rows } = await owner.query("select planting_id from directory.planting where operation_id = $1", [
		operationId,
	]);
	const plantingIds = [rows[0].planting_id as string];
	for (const planting of more) plantingIds.push(await addPlanting(owner, operationId, planting));
	const place = { surveyId: await addSurvey(associate), operationId };
	const grower = growerOf(operationId);
	if (begin) await beginAnswering(grower, place);
	return { place, grower, plantingIds, step: `planting-${plantingIds[0]}` };
}

export function beginAnswering(grower: Grower, place: AnswerPlace) {
	return asGrower(grower, (trx) => startResponse(trx, grower, place, { language: "en", pledgeVersion: "2026-1" }));
}

export async function answeringOf(grower: Grower, place: AnswerPlace) {
	const found = await asGrower(grower, (trx) => findAnswering(trx, grower, place));
	if (!found) throw new Error("there is nothing to answer");
	return found;
}

export async function stepKeysOf(grower: Grower, place: AnswerPlace): Promise<string[]> {
	const { definition, plantings, answers } = await answeringOf(grower, place);
	return listSteps(definition, plantings, answers).map(({ key }) => key);
}

/** Saves a step as its page does: what was typed is read, then kept. @returns what to mend, or what keeping said. */
export async function typeStep(
	grower: Grower,
	place: AnswerPlace,
	stepKey: string,
	values: StepValues,
	language: "en" | "es" = "en",
) {
	return asGrower(grower, async (trx) => {
		const answering = await findAnswering(trx, grower, place);
		if (!answering) return "not_found" as const;
		const settings = { language, season: answering.season, today: `${answering.season}-12-01` };
		const posted = readPostedStep(answering, stepKey, values, settings);
		if (!posted) return "step_not_found" as const;
		if (posted.problems.length > 0) return posted.problems.map(({ field, code }) => `${field}: ${code}`);
		const kept = await keepStep(trx, grower, place, stepKey, posted.answers);
		return typeof kept === "string" ? kept : kept.outcome;
	});
}

export const pounds = (trees: number, normal: number, harvested: number): StepValues => ({
	bearing_trees: String(trees),
	normal_crop: String(normal),
	normal_crop_unit: "lb",
	harvested: String(harvested),
	harvested_unit: "lb",
});

export function submit(grower: Grower, place: AnswerPlace, language: "en" | "es" = "en") {
	return asGrower(grower, (trx) => submitResponse(trx, grower, place, language));
}

/** How much work is queued. The queue belongs to the application's role; the owner of the schema does not see into it. */
export function countJobs(): Promise<number> {
	return scopedTransaction({ kind: "none" }, async (trx) => {
		const { rows } = await sql<{ n: number }>`select count(*)::int as n from graphile_worker._private_jobs`.execute(
			trx,
		);
		return rows[0]!.n;
	});
}

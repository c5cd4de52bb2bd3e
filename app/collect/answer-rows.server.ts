import { isDeepStrictEqual } from "node:util";
import { type Selectable, sql } from "kysely";
import type { Trx } from "#app/auth/scope.server.ts";
import type { DB } from "#db/schema.ts";
import { groupBy } from "#app/lib/group-by.ts";
import type { Answer, Confirmation } from "./form.ts";
import { listPhotoAnswers } from "./photo-rows.server.ts";
import { answersByPlace, placeOf, type PlantingAsked } from "./steps.ts";

/** A planting as it was asked about; what was sent in before trees were kept with it lacks them. */
export type PlantingSent = { plantingId: string; cropKey: string; bearingTrees?: number };
/** What was sent in once: the answers that were kept, and which plantings they are about. Never changed afterwards, but it can be withdrawn. */
export type Submission = { plantings: PlantingSent[]; answers: Answer[] };

export async function listAnswers(trx: Trx, responseId: string): Promise<Answer[]> {
	const rows = await trx
		.selectFrom("collect.answer as a")
		.select(answerColumns)
		.where("a.response_id", "=", responseId)
		.orderBy("a.question_key")
		.orderBy("a.planting_id")
		.execute();
	return [...rows.map(answerOf), ...(await listPhotoAnswers(trx, responseId))];
}

/** Of `collect.answer as a`, what `answerOf` reads. */
export const answerColumns = [
	"a.question_key",
	"a.planting_id",
	"a.kind",
	"a.value",
	"a.given",
	"a.confirmed",
] as const;
type AnswerRow = Pick<
	Selectable<DB["collect.answer"]>,
	"question_key" | "planting_id" | "kind" | "value" | "given" | "confirmed"
>;

export function answerOf(row: AnswerRow): Answer {
	return {
		questionKey: row.question_key,
		plantingId: row.planting_id,
		kind: row.kind as Answer["kind"],
		value: row.value as Answer["value"],
		given: row.given as Answer["given"],
		...(hasAny(row.confirmed) && { confirmed: row.confirmed }),
	};
}

function hasAny(confirmed: unknown): confirmed is Confirmation[] {
	return Array.isArray(confirmed) && confirmed.length > 0;
}

/**
 * Puts `next` in the place of `held`; an answer that stays the same keeps its row and the time it was given.
 * @returns whether anything changed.
 */
export async function replaceAnswers(trx: Trx, responseId: string, held: Answer[], next: Answer[]): Promise<boolean> {
	const before = answersByPlace(held);
	const after = answersByPlace(next);
	const differs = ({ questionKey, plantingId }: Answer) => {
		const at = placeOf(questionKey, plantingId);
		return !isDeepStrictEqual(before.get(at), after.get(at));
	};
	const outdated = held.filter(differs);
	const changed = next.filter(differs);
	for (const { questionKey, plantingId } of outdated) {
		await trx
			.deleteFrom("collect.answer")
			.where("response_id", "=", responseId)
			.where("question_key", "=", questionKey)
			.where("planting_id", "is not distinct from", plantingId)
			.execute();
	}
	if (changed.length > 0) {
		await trx
			.insertInto("collect.answer")
			.values(
				changed.map((answer) => ({
					response_id: responseId,
					question_key: answer.questionKey,
					planting_id: answer.plantingId,
					kind: answer.kind,
					value: answer.value === null ? null : JSON.stringify(answer.value),
					given: answer.given === null ? null : JSON.stringify(answer.given),
					confirmed: JSON.stringify(answer.confirmed ?? []),
				})),
			)
			.execute();
	}
	return outdated.length + changed.length > 0;
}

/** Whether two lists hold the same answers, in whichever order. */
export function sameAnswers(one: Answer[], other: Answer[]): boolean {
	return isDeepStrictEqual(answersByPlace(one), answersByPlace(other));
}

/** The newest of what was sent in and not withdrawn since; `counted` leaves out what came late. */
export async function findNewestSubmission(
	trx: Trx,
	responseId: string,
	which: "any" | "counted" = "any",
): Promise<Submission | undefined> {
	const row = await trx
		.selectFrom("collect.submission")
		.select("answers")
		.where("response_id", "=", responseId)
		.where("withdrawn_at", "is", null)
		.$if(which === "counted", (rows) => rows.where("late", "=", false))
		.orderBy("version", "desc")
		.limit(1)
		.executeTakeFirst();
	return row && (row.answers as Submission);
}

/**
 * What an operation is asked about: its plantings of the crops with which it stands in the survey's frame that stand now,
 * stood when the survey opened, or were answered about. What was pulled out since still bore, or did not, in the season
 * that is asked about. A crop planted after the frame was frozen has no place in its strata.
 */
export async function listPlantingsAsked(
	trx: Trx,
	{ surveyId, operationId }: { surveyId: string; operationId: string },
	answers: Answer[],
): Promise<PlantingAsked[]> {
	const answered = new Set(answers.map(({ plantingId }) => plantingId));
	return (await listPlantingsOf(trx, surveyId, [operationId], answered)).get(operationId) ?? [];
}

/** The same of several operations at once. @param answered plantings that were answered about. */
export async function listPlantingsOf(
	trx: Trx,
	surveyId: string,
	operationIds: string[],
	answered: ReadonlySet<string | null> = new Set(),
): Promise<Map<string, PlantingAsked[]>> {
	const rows = await trx
		.selectFrom("directory.planting as p")
		.innerJoin("directory.crop as c", "c.crop_key", "p.crop_key")
		.innerJoin("collect.frame_crop as f", (join) =>
			join.onRef("f.operation_id", "=", "p.operation_id").onRef("f.crop_key", "=", "p.crop_key"),
		)
		.innerJoin("collect.survey as s", "s.survey_id", "f.survey_id")
		.innerJoin("collect.frame_operation as o", (join) =>
			join.onRef("o.survey_id", "=", "f.survey_id").onRef("o.operation_id", "=", "f.operation_id"),
		)
		.innerJoin("directory.state as z", "z.state_fips", "o.state_fips")
		.where((eb) => eb("p.operation_id", "=", eb.fn.any(eb.val(operationIds))))
		.where("f.survey_id", "=", surveyId)
		.orderBy("c.position")
		.orderBy("p.cultivar")
		.orderBy("p.planting_id")
		.select(["p.planting_id", "p.crop_key", "p.cultivar", "p.bearing_trees", "c.plant_kind", "c.bushel_lb"])
		.select("p.operation_id")
		.select(
			// Pulled out on the day of the opening, it stood that morning.
			sql<boolean>`p.removed_on is null or (p.created_at <= s.opened_at
				and p.removed_on >= (s.opened_at at time zone z.time_zone)::date)`.as("stood"),
		)
		.execute();
	const asked = rows.filter((row) => row.stood || answered.has(row.planting_id));
	const ofEach = groupBy(asked, (row) => row.operation_id);
	return new Map([...ofEach].map(([operationId, plantings]) => [operationId, plantings.map(toPlantingAsked)]));
}

type PlantingRow = {
	planting_id: string;
	crop_key: string;
	cultivar: string;
	bearing_trees: number;
	plant_kind: string;
	bushel_lb: number | null;
};

function toPlantingAsked(row: PlantingRow): PlantingAsked {
	return {
		plantingId: row.planting_id,
		cropKey: row.crop_key,
		cultivar: row.cultivar,
		bearingTrees: row.bearing_trees,
		plantKind: row.plant_kind === "bush" ? "bush" : "tree",
		bushelLb: row.bushel_lb,
	};
}

/** What the operation's crates held when it last told, by crop: what is known is not asked again. */
export async function listCrates(trx: Trx, operationId: string): Promise<Record<string, number>> {
	const rows = await trx
		.selectFrom("collect.answer as a")
		.innerJoin("collect.response as r", "r.response_id", "a.response_id")
		.innerJoin("directory.planting as p", "p.planting_id", "a.planting_id")
		.where("r.operation_id", "=", operationId)
		.where(sql<boolean>`a.given ? 'crateLb'`)
		.distinctOn("p.crop_key")
		.orderBy("p.crop_key")
		.orderBy("a.answered_at", "desc")
		.select(["p.crop_key", sql<number>`(a.given ->> 'crateLb')::float8`.as("crateLb")])
		.execute();
	return Object.fromEntries(rows.map(({ crop_key, crateLb }) => [crop_key, crateLb]));
}

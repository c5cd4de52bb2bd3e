import { createHash } from "node:crypto";
import { sql } from "kysely";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Answer } from "#app/collect/form.ts";
import type { Odd } from "./odd-answers.ts";
import { keyOf, type Place } from "./reviewed-answers.ts";

/** Which figure of the state an answer moves most to the point, and to where it would move without the answer. */
export type Moved = { measureKey: string; cropKey: string; value: number; without: number | null };
/** An oddity with how much it matters. */
export type WeighedOdd = Odd & { effect: number | null; moved: Moved | null };
export type FindingEnd = "confirmed" | "corrected" | "set_aside" | "answer_changed" | "not_odd";
export type FindingStep = FindingEnd | "made" | "reopened" | "asked" | "said_right" | "said_wrong";

type Row = {
	edit_finding_id: string;
	check_key: string;
	question_key: string;
	planting_id: string | null;
	about: Answer[];
	about_key: string;
	outcome: FindingEnd | null;
};

/**
 * Brings the findings of a response to what is odd about its answers now. A finding is of certain answers: others make
 * another one, and the first ends by itself. What an associate ended stays ended for as long as the answers are the same.
 * The caller holds the response locked.
 */
export async function saveFindings(
	trx: Trx,
	responseId: string,
	odd: readonly WeighedOdd[],
	answers: readonly Answer[],
): Promise<void> {
	const rows = await listRows(trx, responseId);
	const byPlace = new Map(answers.map((answer) => [keyOf(answer), answer]));
	const met = new Set<string>();
	for (const one of odd) {
		const about = one.about.flatMap((place) => byPlace.get(keyOf(place)) ?? []);
		const aboutKey = digestOf(about);
		const row = rows.find((held) => held.about_key === aboutKey && isAt(held, one));
		if (!row) await addFinding(trx, responseId, one, about, aboutKey);
		else if (!met.has(row.edit_finding_id)) await meetAgain(trx, row, one);
		if (row) met.add(row.edit_finding_id);
	}
	for (const row of rows.filter(({ edit_finding_id, outcome }) => outcome === null && !met.has(edit_finding_id))) {
		const now = row.about.flatMap((answer) => byPlace.get(keyOf(answer)) ?? []);
		await endByItself(trx, row.edit_finding_id, digestOf(now) === row.about_key ? "not_odd" : "answer_changed");
	}
}

function isAt(row: Row, { checkKey, questionKey, plantingId }: Place & { checkKey: string }): boolean {
	return row.check_key === checkKey && row.question_key === questionKey && row.planting_id === plantingId;
}

async function listRows(trx: Trx, responseId: string): Promise<Row[]> {
	return trx
		.selectFrom("collect.edit_finding")
		.where("response_id", "=", responseId)
		.orderBy("edit_finding_id")
		.forUpdate()
		.select(["edit_finding_id", "check_key", "question_key", "planting_id", "about_key"])
		.select([sql<Answer[]>`about`.as("about"), sql<FindingEnd | null>`outcome`.as("outcome")])
		.execute();
}

async function addFinding(
	trx: Trx,
	responseId: string,
	odd: WeighedOdd,
	about: Answer[],
	aboutKey: string,
): Promise<void> {
	const made = await trx
		.insertInto("collect.edit_finding")
		.values({
			response_id: responseId,
			check_kind: odd.checkKind,
			check_key: odd.checkKey,
			question_key: odd.questionKey,
			planting_id: odd.plantingId,
			crop_key: odd.cropKey,
			about: JSON.stringify(about),
			about_key: aboutKey,
			...judgedOf(odd),
		})
		// Two checks of one key, question and answers would say the same thing twice.
		.onConflict((conflict) => conflict.constraint("edit_finding_once").doNothing())
		.returning("edit_finding_id")
		.executeTakeFirst();
	if (made) await addStep(trx, { findingId: made.edit_finding_id, step: "made", personId: null });
}

async function meetAgain(trx: Trx, { edit_finding_id, outcome }: Row, odd: WeighedOdd): Promise<void> {
	const again = outcome === "answer_changed" || outcome === "not_odd";
	await trx
		.updateTable("collect.edit_finding")
		.set(judgedOf(odd))
		.$if(again, (row) => row.set({ outcome: null, closed_at: null, version: sql`version + 1` }))
		.where("edit_finding_id", "=", edit_finding_id)
		.execute();
	if (again) await addStep(trx, { findingId: edit_finding_id, step: "reopened", personId: null });
}

function judgedOf({ told, effect, moved }: WeighedOdd) {
	return { told: JSON.stringify(told), effect, moved: moved && JSON.stringify(moved) };
}

async function endByItself(trx: Trx, findingId: string, outcome: "answer_changed" | "not_odd"): Promise<void> {
	await trx
		.updateTable("collect.edit_finding")
		.set({ outcome, closed_at: sql`now()`, version: sql`version + 1` })
		.where("edit_finding_id", "=", findingId)
		.execute();
	await addStep(trx, { findingId, step: outcome, personId: null });
}

export type NewStep = {
	findingId: string;
	step: FindingStep;
	personId: string | null;
	words?: string;
	batchId?: string | null;
};

/** Keeps what happened to a finding, with the words that were given for it. */
export async function addStep(trx: Trx, { findingId, step, personId, words = "", batchId = null }: NewStep) {
	await trx
		.insertInto("collect.edit_finding_step")
		.values({ edit_finding_id: findingId, step, person_id: personId, words, batch_id: batchId })
		.execute();
}

/** Names the answers, whichever way they were typed and in whichever order they stand. */
function digestOf(about: readonly Answer[]): string {
	const told = about.map(({ questionKey, plantingId, kind, value }) =>
		JSON.stringify([questionKey, plantingId, kind, value]),
	);
	return createHash("sha256").update(told.toSorted().join("\n")).digest("base64url");
}

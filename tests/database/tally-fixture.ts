import { type Insertable, type Kysely, sql, type Transaction } from "kysely";
import { expect } from "vitest";
import { setScope } from "#app/auth/scope.server.ts";
import type { KeptTally } from "#app/tally/tally.ts";
import type { CollectFact, DB } from "#db/schema.ts";

export type Place = { operationId: string; ownerId: string; countyFips: string; stratumKey: string };
export type TestFact = Partial<Insertable<CollectFact>> & { y: number | null; x: number | null };

/** A survey of apples with a frozen frame: `each` operations in every stratum of every county, an owner for each `held`. */
export async function frameOf(
	owner: Kysely<DB>,
	{ counties, strata, each, held = 2 }: { counties: string[]; strata: string[]; each: number; held?: number },
): Promise<{ surveyId: string; places: Place[] }> {
	const surveyId = await addSurvey(owner);
	const places: Place[] = [];
	for (const countyFips of counties) {
		for (const stratumKey of strata) {
			for (let at = 0; at < each; at++) {
				const ownerId = at % held > 0 ? places.at(-1)!.ownerId : await addOwner(owner);
				places.push({ operationId: await addOperation(owner, ownerId, countyFips), ownerId, countyFips, stratumKey });
			}
		}
	}
	await owner
		.insertInto("collect.frame_operation")
		.values(places.map((place) => ({ ...placeColumns(surveyId, place), size_class: "small" })))
		.execute();
	return { surveyId, places };
}

function placeColumns(surveyId: string, { operationId, ownerId, countyFips, stratumKey }: Place) {
	return {
		survey_id: surveyId,
		operation_id: operationId,
		owner_id: ownerId,
		county_fips: countyFips,
		state_fips: countyFips.slice(0, 2),
		stratum_key: stratumKey,
	};
}

/** Puts one fact of an operation in the place of what was there, in the transaction and scope of the caller. */
export async function putFact(trx: Transaction<DB> | Kysely<DB>, surveyId: string, place: Place, fact: TestFact) {
	await trx
		.insertInto("collect.fact")
		.values({ measure_key: "loss", crop_key: "apple", ...placeColumns(surveyId, place), ...fact })
		.onConflict((conflict) =>
			conflict
				.columns(["survey_id", "measure_key", "crop_key", "operation_id"])
				.doUpdateSet((eb) => ({ y: eb.ref("excluded.y"), x: eb.ref("excluded.x") })),
		)
		.execute();
}

/** A transaction of the application as the operation's grower, as submitting and withdrawing run. */
export function asItsGrower<T>(app: Kysely<DB>, place: Place, work: (trx: Transaction<DB>) => Promise<T>): Promise<T> {
	return app.transaction().execute(async (trx) => {
		await setScope(trx, { kind: "grower", operationIds: [place.operationId] });
		return work(trx);
	});
}

async function addSurvey(owner: Kysely<DB>): Promise<string> {
	const { rows } = await sql<{ survey_id: string }>`with
		f as (insert into collect.form (form_key) values ('tallied') on conflict (form_key) do update set form_key = 'tallied'
			returning form_id),
		v as (insert into collect.form_version (form_id, version, definition)
			select form_id, (select count(*) + 1 from collect.form_version), '{}' from f returning form_version_id)
		insert into collect.survey (form_version_id, season, title, crop_keys, closes_at, opened_at)
			select form_version_id, 2031, '{}', '{apple}', now() + interval '1 day', now() from v returning survey_id`.execute(
		owner,
	);
	return rows[0]!.survey_id;
}

async function addOwner(owner: Kysely<DB>): Promise<string> {
	const row = owner.insertInto("directory.owner").values({ name: "Ada Quill" }).returning("owner_id");
	return (await row.executeTakeFirstOrThrow()).owner_id;
}

async function addOperation(owner: Kysely<DB>, ownerId: string, countyFips: string): Promise<string> {
	const { operation_id } = await owner
		.insertInto("directory.operation")
		.values({
			owner_id: ownerId,
			name: "Quail Bend Orchard",
			contact_name: "Ada Quill",
			county_fips: countyFips,
			state_fips: countyFips.slice(0, 2),
		})
		.returning("operation_id")
		.executeTakeFirstOrThrow();
	return operation_id;
}

const sums = { sumY: 0, sumX: 0, mYY: 0, mXX: 0, mXY: 0, largestY: 0, secondY: 0 };
const unsummed = (tally: KeptTally) => ({ ...tally, ...sums });

/** Equal in all that is counted, and to rounding in what is summed: the order of adding may differ. */
export function expectSameTallies(actual: KeptTally[], expected: KeptTally[]): void {
	expect(actual.map(unsummed)).toEqual(expected.map(unsummed));
	for (const [index, tally] of actual.entries()) {
		const other = expected[index]!;
		for (const key of ["sumY", "sumX", "largestY", "secondY"] as const) expectClose(tally[key], other[key], 1e6);
		for (const key of ["mYY", "mXX", "mXY"] as const) expectClose(tally[key], other[key], 1e9);
	}
}

function expectClose(actual: number, expected: number, size: number): void {
	expect(Math.abs(actual - expected)).toBeLessThanOrEqual(1e-12 * Math.max(size, Math.abs(expected)));
}

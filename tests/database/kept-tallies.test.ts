import * as fc from "fast-check";
import { type Kysely, sql } from "kysely";
import { afterAll, beforeAll, expect, test } from "vitest";
import { setScope } from "#app/auth/scope.server.ts";
import { groupBy } from "#app/lib/group-by.ts";
import { listTallies, rebuildTallies } from "#app/tally/tally.server.ts";
import { type KeptTally, tallyOf } from "#app/tally/tally.ts";
import { connect } from "#db/connect.ts";
import type { DB } from "#db/schema.ts";
import { createTestDatabase } from "#tests/helpers/database.ts";
import { asItsGrower, expectSameTallies, frameOf, type Place, putFact } from "./tally-fixture.ts";

// Tallies are kept by triggers on the facts: here all that can happen to facts, by one hand and by many at once.

let database: Awaited<ReturnType<typeof createTestDatabase>>;
let owner: Kysely<DB>;
let app: Kysely<DB>;

beforeAll(async () => {
	database = await createTestDatabase();
	owner = connect(database.ownerUrl);
	app = connect(database.appUrl, { max: 12 });
});
afterAll(async () => {
	await Promise.all([owner.destroy(), app.destroy()]);
	await database.drop();
});

const kept = (surveyId: string) => owner.transaction().execute((trx) => listTallies(trx, surveyId));

async function rebuilt(surveyId: string): Promise<KeptTally[]> {
	return owner.transaction().execute(async (trx) => {
		await trx.deleteFrom("collect.tally").where("survey_id", "=", surveyId).execute();
		await rebuildTallies(trx, surveyId);
		return listTallies(trx, surveyId);
	});
}

type Held = { place: Place; y: number | null; x: number | null; setAside: boolean };

/** What the tallies of these facts are, counted one by one. */
function counted(facts: Held[]): KeptTally[] {
	const cells = groupBy(facts, ({ place }) => `${place.countyFips} ${place.stratumKey}`);
	return [...cells]
		.toSorted(([a], [b]) => (a < b ? -1 : 1))
		.map(([, held]) => {
			const { countyFips, stratumKey } = held[0]!.place;
			const summed = held.flatMap(({ place, y, x, setAside }) =>
				y === null || x === null || setAside ? [] : [{ y, x, ownerId: place.ownerId }],
			);
			const owned = [...groupBy(summed, ({ ownerId }) => ownerId).values()]
				.map((own) => own.reduce((sum, { y }) => sum + y, 0))
				.toSorted((a, b) => b - a);
			return {
				measureKey: "loss",
				cropKey: "apple",
				countyFips,
				stateFips: countyFips.slice(0, 2),
				stratumKey,
				...tallyOf(summed),
				owners: owned.length,
				largestY: owned[0] ?? 0,
				secondY: owned[1] ?? 0,
				days: null,
				setAside: held.filter(({ setAside }) => setAside).length,
				unanswered: held.filter(({ y, setAside }) => y === null && !setAside).length,
			};
		});
}

const steps = fc.array(
	fc.record({
		who: fc.nat(15),
		does: fc.constantFrom("submit", "submit", "submit", "stay_silent", "withdraw", "set_aside", "take_back_in"),
		y: fc.double({ min: -1e5, max: 1e6, noNaN: true }),
		x: fc.double({ min: 0, max: 1e6, noNaN: true }),
	}),
	{ minLength: 5, maxLength: 40 },
);

test("after any history the kept tallies are those of the facts, and equal to a rebuild", async () => {
	await fc.assert(
		// First answers are added where each owner has one operation, and tallied anew where an owner has two.
		fc.asyncProperty(steps, fc.constantFrom(1, 2), async (history, held) => {
			const frame = await frameOf(owner, { counties: ["19103", "55025"], strata: ["a", "b"], each: 4, held });
			const facts = new Map<string, Held>();
			for (const step of history) await live(frame.surveyId, frame.places[step.who]!, step, facts);
			const now = await kept(frame.surveyId);
			expectSameTallies(now, counted([...facts.values()]));
			expectSameTallies(await rebuilt(frame.surveyId), now);
		}),
		{ numRuns: 12, seed: 20_401 },
	);
}, 120_000);

type Step = { does: string; y: number; x: number };

async function live(surveyId: string, place: Place, { does, y, x }: Step, facts: Map<string, Held>): Promise<void> {
	const held = facts.get(place.operationId);
	if (does === "submit" || does === "stay_silent") {
		const told = does === "submit" ? { y, x } : { y: null, x: null };
		await asItsGrower(app, place, (trx) => putFact(trx, surveyId, place, told));
		facts.set(place.operationId, { place, ...told, setAside: held?.setAside ?? false });
	} else if (does === "withdraw") {
		await asItsGrower(app, place, (trx) =>
			trx
				.deleteFrom("collect.fact")
				.where("survey_id", "=", surveyId)
				.where("operation_id", "=", place.operationId)
				.execute(),
		);
		facts.delete(place.operationId);
	} else {
		const setAside = does === "set_aside";
		await setFactsAside(surveyId, place, setAside);
		if (held) facts.set(place.operationId, { ...held, setAside });
	}
}

/** As the desk of the operation's state. */
function setFactsAside(surveyId: string, { operationId, countyFips }: Place, setAside: boolean) {
	return app.transaction().execute(async (trx) => {
		await setScope(trx, { kind: "desk", stateFips: [countyFips.slice(0, 2)] });
		await trx
			.updateTable("collect.fact")
			.set({ set_aside: setAside })
			.where("survey_id", "=", surveyId)
			.where("operation_id", "=", operationId)
			.execute();
	});
}

test("many who answer, correct and withdraw at the same moment lose nothing and never wait in a ring", async () => {
	const { surveyId, places } = await frameOf(owner, { counties: ["19103"], strata: ["a", "b"], each: 8 });
	const measures = ["loss", "yield", "trees"];
	await Promise.all(
		places.map((place, at) =>
			asItsGrower(app, place, async (trx) => {
				// Each in an order of its own, in several statements: what would tie a knot if cells were locked one by one.
				const order = at % 2 === 0 ? measures : measures.toReversed();
				for (const measure_key of order) await putFact(trx, surveyId, place, { measure_key, y: at, x: 1 });
				await putFact(trx, surveyId, place, { measure_key: order[0], y: at + 1, x: 1 });
				if (at % 5 === 4) await trx.deleteFrom("collect.fact").where("operation_id", "=", place.operationId).execute();
			}),
		),
	);
	const now = await kept(surveyId);
	expect(now.map(({ measureKey, stratumKey, n }) => [measureKey, stratumKey, n])).toEqual([
		["loss", "a", 7],
		["loss", "b", 6],
		["trees", "a", 7],
		["trees", "b", 6],
		["yield", "a", 7],
		["yield", "b", 6],
	]);
	expectSameTallies(await rebuilt(surveyId), now);
});

test("a rebuild among submissions loses none of them", async () => {
	const { surveyId, places } = await frameOf(owner, { counties: ["19103"], strata: ["a"], each: 10 });
	const rebuild = () =>
		app.transaction().execute(async (trx) => {
			await setScope(trx, { kind: "network" });
			await rebuildTallies(trx, surveyId);
		});
	const submit = (place: Place) => asItsGrower(app, place, (trx) => putFact(trx, surveyId, place, { y: 1, x: 2 }));
	await Promise.all(places.flatMap((place, at) => (at % 3 === 0 ? [submit(place), rebuild()] : [submit(place)])));
	expect((await kept(surveyId)).map(({ n, sumX }) => [n, sumX])).toEqual([[10, 20]]);
});

test("the tallies of many places at once are those of one after the other", async () => {
	const strata = Array.from({ length: 120 }, (_, at) => `s${String(at).padStart(3, "0")}`);
	const { surveyId, places } = await frameOf(owner, { counties: ["19103"], strata, each: 1 });
	for (const place of places.slice(0, 2)) await putFact(owner, surveyId, place, { y: 5, x: 1 });
	const rest = sql`insert into collect.fact (survey_id, measure_key, crop_key, operation_id, owner_id, county_fips, state_fips,
			stratum_key, y, x)
		select survey_id, 'loss', 'apple', operation_id, owner_id, county_fips, state_fips, stratum_key, 5, 1
		from collect.frame_operation where survey_id = ${surveyId} on conflict do nothing`;
	await rest.execute(owner);
	const now = await kept(surveyId);
	expect(now.map(({ stratumKey, n, sumY, owners }) => [stratumKey, n, sumY, owners])).toEqual(
		strata.map((stratum) => [stratum, 1, 5, 1]),
	);
	await owner.deleteFrom("collect.fact").where("survey_id", "=", surveyId).execute();
	expect(await kept(surveyId)).toEqual([]);
});

test("one statement that adds, changes and drops facts tallies each of them once", async () => {
	const { surveyId, places } = await frameOf(owner, { counties: ["19103"], strata: ["a"], each: 4, held: 1 });
	await putFact(owner, surveyId, places[0]!, { y: 1, x: 1 });
	const all = sql`select survey_id, 'loss', 'apple', operation_id, owner_id, county_fips, state_fips, stratum_key, 10, 1
		from collect.frame_operation where survey_id = ${surveyId}`;
	const columns = sql`(survey_id, measure_key, crop_key, operation_id, owner_id, county_fips, state_fips, stratum_key, y, x)`;
	await sql`insert into collect.fact ${columns} ${all}
		on conflict (survey_id, measure_key, crop_key, operation_id) do update set y = 2`.execute(owner);
	expect((await kept(surveyId)).map(({ n, sumY, owners }) => [n, sumY, owners])).toEqual([[4, 32, 4]]);
	const { operationId } = places[3]!;
	await owner.deleteFrom("collect.fact").where("operation_id", "=", operationId).execute();
	await sql`with gone as (delete from collect.fact where survey_id = ${surveyId} and y = 2)
		insert into collect.fact ${columns} ${all} and operation_id = ${operationId}`.execute(owner);
	const now = await kept(surveyId);
	expect(now.map(({ n, sumY, owners, secondY }) => [n, sumY, owners, secondY])).toEqual([[3, 30, 3, 10]]);
	expectSameTallies(await rebuilt(surveyId), now);
});

test("values of 1e9 that differ by one keep their spread", async () => {
	const { surveyId, places } = await frameOf(owner, { counties: ["19103"], strata: ["a"], each: 10 });
	const facts = places.map((place, at) => ({ place, y: 1e9 + (at % 2), x: 1e9 + at }));
	for (const { place, y, x } of facts) await putFact(owner, surveyId, place, { y, x });
	const [tally] = await kept(surveyId);
	expect(tally).toMatchObject({ n: 10, sumY: 1e10 + 5, sumX: 1e10 + 45 });
	for (const key of ["mYY", "mXX", "mXY"] as const) expect(tally![key] / tallyOf(facts)[key]).toBeCloseTo(1, 9);
});

test("a measure of days counts each day, and the two largest are owners and not operations", async () => {
	const { surveyId, places } = await frameOf(owner, { counties: ["19103"], strata: ["a"], each: 6 });
	const apart = await frameOf(owner, { counties: ["19103"], strata: ["a"], each: 6, held: 1 });
	const days = [121, 119, 121, 121, 130, 119];
	for (const [at, place] of places.entries()) {
		await putFact(owner, surveyId, place, { measure_key: "bloom", y: days[at]!, x: 1, is_day: true });
		await putFact(owner, surveyId, place, { y: at, x: 1, set_aside: at === 5 });
		const alone = apart.places[at]!;
		await putFact(owner, apart.surveyId, alone, { measure_key: "bloom", y: days[at]!, x: 1, is_day: true });
		await putFact(owner, apart.surveyId, alone, { y: -at, x: 1, set_aside: at === 0 });
	}
	const [bloom, loss] = await kept(surveyId);
	const [bloomApart, lossApart] = await kept(apart.surveyId);
	expect(bloomApart!.days).toEqual(bloom!.days);
	// Below nothing, as no form of ours can be: the two largest are still those of owners, and not the 0 of nobody.
	expect(lossApart).toMatchObject({ n: 5, owners: 5, largestY: -1, secondY: -2, setAside: 1 });
	expect(bloom!.days).toEqual([
		{ value: 119, n: 2 },
		{ value: 121, n: 3 },
		{ value: 130, n: 1 },
	]);
	// Owners hold operations 0 and 1, 2 and 3, 4 and the one set aside.
	expect(loss).toMatchObject({ days: null, owners: 3, largestY: 5, secondY: 4, setAside: 1 });
});

test("a grower who moves the tallies sees none of them, before or after", async () => {
	const { surveyId, places } = await frameOf(owner, { counties: ["19103"], strata: ["a"], each: 2 });
	await putFact(owner, surveyId, places[1]!, { y: 3, x: 1 });
	const seen = await asItsGrower(app, places[0]!, async (trx) => {
		await putFact(trx, surveyId, places[0]!, { y: 4, x: 1 });
		const { rows } = await sql<object>`select auth.scope() as scope, (select count(*) from collect.tally) as tallies,
			(select count(*) from collect.fact where survey_id = ${surveyId}) as facts`.execute(trx);
		return rows;
	});
	expect(seen).toEqual([{ scope: "grower", tallies: 0, facts: 1 }]);
	expect((await kept(surveyId)).map(({ n, sumY }) => [n, sumY])).toEqual([[2, 7]]);
});

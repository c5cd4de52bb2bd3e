import { sql } from "kysely";
import { expect, test } from "vitest";
import type { Trx } from "#app/auth/scope.server.ts";
import { asGrower, growerOf } from "./answering-fixture.ts";
import { addOperation, asDesk, connectOwner, openSurveysDatabase } from "./surveys-fixture.ts";

// An operation's trees are kept by triggers: after all that can happen to its plantings they are what adding up gives.

const { owner, ownerUrl, iowa, wisconsin } = await openSurveysDatabase();

/** What is kept of everybody must be what adding up from nothing gives. @returns what is kept of these. */
async function expectAddedUp(...operationIds: string[]): Promise<number[]> {
	const { rows } = await owner.query<{ operation_id: string; kept: string; added: string }>(
		`select o.operation_id, o.all_bearing_trees::text as kept, coalesce(sum(p.bearing_trees), 0)::text as added
		from directory.operation o left join directory.planting p on p.operation_id = o.operation_id and p.removed_on is null
		group by 1`,
	);
	expect(rows.map(({ kept }) => kept)).toEqual(rows.map(({ added }) => added));
	return operationIds.map((id) => Number(rows.find(({ operation_id }) => operation_id === id)?.kept));
}

const add = (operationId: string, trees: number) =>
	owner.query("insert into directory.planting (operation_id, crop_key, bearing_trees) values ($1, 'plum', $2)", [
		operationId,
		trees,
	]);
const isApple = sql`crop_key = 'apple'`;
const setTrees = (trees: number) => async (trx: Trx) => {
	await sql`update directory.planting set bearing_trees = ${trees} where ${isApple}`.execute(trx);
};

test("follow what is planted, changed, taken out, put back, moved and deleted", async () => {
	const a = await addOperation(owner, { state: "19", trees: 100 });
	const b = await addOperation(owner, { state: "19", trees: 5, removedOn: "2030-01-01" });
	expect(await expectAddedUp(a, b)).toEqual([100, 0]);
	await add(a, 7);
	await owner.query("update directory.planting set removed_on = null where operation_id = $1", [b]);
	expect(await expectAddedUp(a, b)).toEqual([107, 5]);
	await owner.query("update directory.planting set bearing_trees = bearing_trees + 1");
	expect(await expectAddedUp(a, b)).toEqual([109, 6]);
	await owner.query("update directory.planting set operation_id = $2 where operation_id = $1 and crop_key = 'plum'", [
		a,
		b,
	]);
	expect(await expectAddedUp(a, b)).toEqual([101, 14]);
	await owner.query("update directory.planting set removed_on = '2031-01-01' where operation_id = $1", [b]);
	expect(await expectAddedUp(a, b)).toEqual([101, 0]);
	await owner.query("delete from directory.planting where operation_id = $1", [a]);
	expect(await expectAddedUp(a, b)).toEqual([0, 0]);
});

test("follow whoever may write plantings, and nobody else", async () => {
	const id = await addOperation(owner, { state: "19", trees: 10 });
	await asGrower(growerOf(id), setTrees(20));
	expect(await expectAddedUp(id)).toEqual([20]);
	await asDesk(iowa, setTrees(30));
	expect(await expectAddedUp(id)).toEqual([30]);
	await asDesk(wisconsin, setTrees(40));
	expect(await expectAddedUp(id)).toEqual([30]);
});

test("lose nothing of two who write plantings of one operation at once", async () => {
	const id = await addOperation(owner, { state: "19", trees: 10 });
	await using other = await connectOwner(ownerUrl);
	await owner.query("begin");
	await add(id, 1);
	const second = other.query(
		"insert into directory.planting (operation_id, crop_key, bearing_trees) values ($1, 'plum', 2)",
		[id],
	);
	await owner.query("commit");
	await second;
	expect(await expectAddedUp(id)).toEqual([13]);
});

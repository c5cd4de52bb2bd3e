import type { Client } from "pg";
import { afterAll, beforeAll, expect, test } from "vitest";
import { scopedTransaction } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { listOperations } from "#app/directory/operation-list.server.ts";
import { OperationQuery } from "#app/directory/operation.schema.ts";
import { findOwnPlace, moveOperation, removePin } from "#app/directory/own-place.server.ts";
import type { Pin } from "#app/lib/geography/pin.ts";
import { createTestDatabase } from "#tests/helpers/database.ts";
import { answeringOf, asGrower, askGrower, growerOf, linkOf } from "./answering-fixture.ts";
import { addOperation, addPerson, asDesk, connectOwner, count, loadPlaces, useDatabase } from "./surveys-fixture.ts";

let database: Awaited<ReturnType<typeof createTestDatabase>>;
let owner: Client;
let iowa: Associate;
let wisconsin: Associate;

beforeAll(async () => {
	database = await createTestDatabase();
	useDatabase(database);
	owner = await connectOwner(database.ownerUrl);
	await loadPlaces(owner);
	iowa = await addPerson(owner, "Iowa's associate", ["19"]);
	wisconsin = await addPerson(owner, "Wisconsin's associate", ["55"]);
});
afterAll(async () => {
	await owner.end();
	await database.drop();
});

const madison: Pin = { longitude: -89.4, latitude: 43.07 };
const move = (operationId: string, place: { countyFips: string; pin: Pin | null }, viewer = growerOf(operationId)) =>
	asGrower(viewer, (trx) => moveOperation(trx, viewer, operationId, place));
const placeOf = (operationId: string, viewer = growerOf(operationId)) =>
	asGrower(viewer, (trx) => findOwnPlace(trx, viewer, operationId));

/** What is written down of the place, as it really is. */
async function written(operationId: string) {
	const { rows } = await owner.query(
		`select county_fips, state_fips, longitude, latitude from directory.operation
		left join directory.operation_pin using (operation_id) where operation_id = $1`,
		[operationId],
	);
	return rows[0];
}
const seenBy = async (associate: Associate, operationId: string) => {
	const { rows } = await asDesk(associate, (trx) => listOperations(trx, associate, OperationQuery.parse({})));
	return rows.some((row) => row.operationId === operationId);
};

test("a pin moves the operation to its county and under the eyes of that state's associates", async () => {
	const operationId = await addOperation(owner, { state: "19" });
	expect([await seenBy(iowa, operationId), await seenBy(wisconsin, operationId)]).toEqual([true, false]);
	expect(await move(operationId, { countyFips: "55025", pin: madison })).toBe("moved");
	expect(await written(operationId)).toEqual({ county_fips: "55025", state_fips: "55", ...madison });
	expect([await seenBy(iowa, operationId), await seenBy(wisconsin, operationId)]).toEqual([false, true]);
	expect(await placeOf(operationId)).toMatchObject({ operation: { countyName: "Dane" }, pin: madison });
	const logged = "log.event where action = 'operation.moved' and subject_id = $1 and state_fips = '55'";
	expect(await count(owner, logged, [operationId])).toBe(1);
	expect(await count(owner, "log.event where detail::text ~ '43.07|89.4'")).toBe(0);
});

test("a survey that has opened keeps the county of its frozen frame", async () => {
	const { place, grower } = await askGrower(owner, iowa);
	await move(place.operationId, { countyFips: "55025", pin: null });
	expect(await answeringOf(grower, place)).toMatchObject({ countyName: "Johnson", stateFips: "19" });
	expect(await written(place.operationId)).toMatchObject({ county_fips: "55025" });
});

test("a pin in the same county is kept and moves nothing; a county chosen elsewhere takes the pin away", async () => {
	const operationId = await addOperation(owner, { state: "55" });
	expect(await move(operationId, { countyFips: "55025", pin: madison })).toBe("stayed");
	expect(await written(operationId)).toMatchObject(madison);
	expect(await move(operationId, { countyFips: "55025", pin: null })).toBe("stayed");
	expect(await written(operationId)).toMatchObject(madison);
	expect(await move(operationId, { countyFips: "19103", pin: null })).toBe("moved");
	expect(await written(operationId)).toMatchObject({ county_fips: "19103", longitude: null });
});

test("a pin is moved, and taken away without a change of the county", async () => {
	const operationId = await addOperation(owner, { state: "55" });
	await move(operationId, { countyFips: "55025", pin: madison });
	await move(operationId, { countyFips: "55025", pin: { ...madison, latitude: 43.1 } });
	expect(await written(operationId)).toMatchObject({ latitude: 43.1 });
	expect(await asGrower(growerOf(operationId), (trx) => removePin(trx, growerOf(operationId), operationId))).toBe(
		"removed",
	);
	expect(await written(operationId)).toMatchObject({ county_fips: "55025", longitude: null });
});

test("a county that the network does not cover is refused", async () => {
	const operationId = await addOperation(owner, { state: "19" });
	expect(await move(operationId, { countyFips: "39049", pin: madison })).toBe("unknown_county");
	expect(await written(operationId)).toMatchObject({ county_fips: "19103", longitude: null });
});

test("nobody but its own grower reads a pin: no desk, no job, nobody without a scope, no reader", async () => {
	const operationId = await addOperation(owner, { state: "55" });
	const other = await addOperation(owner, { state: "55" });
	await move(operationId, { countyFips: "55025", pin: madison });
	expect(await count(owner, "directory.operation_pin where operation_id = $1", [operationId])).toBe(1);

	const seen = (scope: Parameters<typeof scopedTransaction>[0]) =>
		scopedTransaction(scope, (trx) =>
			trx.selectFrom("directory.operation_pin").select("longitude").where("operation_id", "=", operationId).execute(),
		);
	expect(await seen({ kind: "grower", operationIds: [operationId] })).toHaveLength(1);
	for (const kind of ["network", "none"] as const) expect(await seen({ kind })).toEqual([]);
	expect(await seen({ kind: "desk", stateFips: ["17", "19", "27", "55"] })).toEqual([]);
	expect(await seen({ kind: "grower", operationIds: [other] })).toEqual([]);

	const reader = await connectOwner(database.readerUrl);
	await expect(reader.query("select longitude from directory.operation_pin")).rejects.toMatchObject({ code: "42501" });
	await reader.end();
});

test("another grower's place is neither seen nor changed, though it is there, and a personal link opens none", async () => {
	const [mine, theirs] = [await addOperation(owner, { state: "19" }), await addOperation(owner, { state: "55" })];
	await move(theirs, { countyFips: "55025", pin: madison });
	const before = await written(theirs);
	const byLink = linkOf({ surveyId: crypto.randomUUID(), operationId: theirs });
	for (const viewer of [growerOf(mine), byLink]) {
		expect(await placeOf(theirs, viewer)).toBeUndefined();
		expect(await move(theirs, { countyFips: "19103", pin: null }, viewer)).toBe("not_found");
		expect(await asGrower(viewer, (trx) => removePin(trx, viewer, theirs))).toBe("not_found");
	}
	expect(await written(theirs)).toEqual(before);
});

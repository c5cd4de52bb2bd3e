import type { Client } from "pg";
import { afterAll, beforeAll, expect, test } from "vitest";
import type { Associate } from "#app/auth/viewer.ts";
import { findWaiver, recordWaiver } from "#app/directory/waiver.server.ts";
import { createTestDatabase } from "#tests/helpers/database.ts";
import { addOperation, addPerson, asDesk, connectOwner, loadPlaces, useDatabase } from "./surveys-fixture.ts";

let database: Awaited<ReturnType<typeof createTestDatabase>>;
let owner: Client;
let iowa: Associate;
let wisconsin: Associate;

beforeAll(async () => {
	database = await createTestDatabase();
	useDatabase(database);
	owner = await connectOwner(database.ownerUrl);
	await loadPlaces(owner);
	iowa = await addPerson(owner, "Ines Rowan", ["19"]);
	wisconsin = await addPerson(owner, "Otto Vance", ["55"]);
});
afterAll(async () => {
	await owner.end();
	await database.drop();
});

const record = (viewer: Associate, operationId: string, allows: boolean) =>
	asDesk(viewer, (trx) => recordWaiver(trx, viewer, operationId, allows));
const find = (viewer: Associate, operationId: string) => asDesk(viewer, (trx) => findWaiver(trx, viewer, operationId));
const logged = async (operationId: string) => {
	const { rows } = await owner.query(
		"select action, person_id from log.event where subject_id = $1 order by event_id",
		[operationId],
	);
	return rows.map((row) => [row.action, row.person_id]);
};

test("an owner's leave to publish is recorded with day and person, withdrawn, and logged once each", async () => {
	const operationId = await addOperation(owner, { state: "19" });
	expect(await find(iowa, operationId)).toBeUndefined();
	expect([await record(iowa, operationId, true), await record(iowa, operationId, true)]).toEqual([
		"recorded",
		"unchanged",
	]);
	const waiver = await find(iowa, operationId);
	expect(waiver).toMatchObject({ recordedBy: "Ines Rowan" });
	expect(Math.abs(Date.now() - waiver!.recordedAt.getTime())).toBeLessThan(60_000);
	expect([await record(iowa, operationId, false), await record(iowa, operationId, false)]).toEqual([
		"recorded",
		"unchanged",
	]);
	expect(await find(iowa, operationId)).toBeUndefined();
	expect(await logged(operationId)).toEqual([
		["operation.publication_allowed", iowa.personId],
		["operation.publication_disallowed", iowa.personId],
	]);
});

test("another state's associate neither sees nor records it", async () => {
	const operationId = await addOperation(owner, { state: "19" });
	await record(iowa, operationId, true);
	expect(await find(wisconsin, operationId)).toBeUndefined();
	expect(await record(wisconsin, operationId, false)).toBe("not_found");
	const { rows } = await owner.query(
		`select publication_waived_at is not null as waived from directory.owner join directory.operation using (owner_id)
		where operation_id = $1`,
		[operationId],
	);
	expect(rows).toEqual([{ waived: true }]);
});

test("who has left allows nothing", async () => {
	const operationId = await addOperation(owner, { state: "19", status: "left" });
	expect(await record(iowa, operationId, true)).toBe("not_found");
});

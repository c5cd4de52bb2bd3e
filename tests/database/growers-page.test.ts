import type { Client } from "pg";
import { afterAll, beforeAll, expect, test } from "vitest";
import { listGrantees } from "#app/auth/grantees.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { ContactForm } from "#app/collect/contacts.schema.ts";
import { listContacts, noteContact } from "#app/collect/contacts.server.ts";
import { editOperation, type OperationEdit } from "#app/directory/edit-operation.server.ts";
import { createTestDatabase } from "#tests/helpers/database.ts";
import { addOperation, addPerson, asDesk, connectOwner, count, loadPlaces, useDatabase } from "./surveys-fixture.ts";

let database: Awaited<ReturnType<typeof createTestDatabase>>;
let owner: Client;
let iowa: Associate;
let both: Associate;

beforeAll(async () => {
	database = await createTestDatabase();
	useDatabase(database);
	owner = await connectOwner(database.ownerUrl);
	await loadPlaces(owner);
	iowa = await addPerson(owner, "Iowa's associate", ["19"]);
	both = await addPerson(owner, "Associate of both", ["19", "55"]);
});
afterAll(async () => {
	await owner.end();
	await database.drop();
});

const edit = (viewer: Associate, operationId: string, more: Partial<OperationEdit> = {}) =>
	asDesk(viewer, (trx) =>
		editOperation(trx, viewer, operationId, {
			name: "Quail Bend Orchard",
			contactName: "Ada Quill",
			phone: null,
			countyFips: "19103",
			language: "en",
			massUnit: "lb",
			...more,
		}),
	);
const stored = async (operationId: string) =>
	(
		await owner.query(
			"select name, contact_name, phone, county_fips, state_fips, language, mass_unit from directory.operation where operation_id = $1",
			[operationId],
		)
	).rows[0];

test("an associate changes what is written down of a grower, and the log names the fields and not what they say", async () => {
	const operationId = await addOperation(owner, { state: "19" });
	expect(await edit(iowa, operationId)).toBe("unchanged");
	expect(await edit(iowa, operationId, { name: "Wren Hollow", phone: "555 0100", language: "es" })).toBe("edited");
	expect(await stored(operationId)).toMatchObject({ name: "Wren Hollow", phone: "555 0100", language: "es" });
	const { rows } = await owner.query(
		"select detail from log.event where action = 'operation.edited' and subject_id = $1",
		[operationId],
	);
	expect(rows).toEqual([{ detail: { fields: ["name", "phone", "language"] } }]);
});

test("a grower is moved within the granted states and to no other", async () => {
	const operationId = await addOperation(owner, { state: "19" });
	expect(await edit(iowa, operationId, { countyFips: "55025" })).toBe("unknown_county");
	expect(await edit(iowa, operationId, { countyFips: "19000" })).toBe("unknown_county");
	expect(await stored(operationId)).toMatchObject({ county_fips: "19103" });
	expect(await edit(both, operationId, { countyFips: "55025" })).toBe("edited");
	expect(await stored(operationId)).toMatchObject({ county_fips: "55025", state_fips: "55" });
	expect(await edit(iowa, operationId, { name: "Mine" })).toBe("not_found");
	expect(await count(owner, "directory.operation where operation_id = $1", [operationId])).toBe(1);
});

test("contacts are noted for growers of granted states, newest first", async () => {
	const operationId = await addOperation(owner, { state: "19" });
	const beyond = await addOperation(owner, { state: "55" });
	const note = (id: string, more: object) => {
		const contact = ContactForm.parse({ way: "telephone", outcome: "no_answer", ...more });
		return asDesk(iowa, (trx) => noteContact(trx, iowa, id, contact));
	};
	expect(await note(operationId, {})).toBe("noted");
	expect(await note(operationId, { outcome: "call_back", note: "After milking", nextOn: "2031-05-04" })).toBe("noted");
	expect(await note(beyond, {})).toBe("not_found");
	expect(await asDesk(iowa, (trx) => listContacts(trx, operationId))).toMatchObject([
		{ outcome: "call_back", note: "After milking", nextOn: "2031-05-04", personName: "Iowa's associate" },
		{ outcome: "no_answer", note: "", nextOn: null },
	]);
	expect(await count(owner, "collect.contact where operation_id = $1", [beyond])).toBe(0);
});

test("people are those who sign in now", async () => {
	const operationId = await addOperation(owner, { state: "19" });
	for (const [name, revoked] of [
		["Rosa", null],
		["Bo", "2030-01-01"],
	] as const) {
		const { personId } = await addPerson(owner, name, []);
		await owner.query(
			"insert into auth.role_grant (person_id, role, operation_id, revoked_at) values ($1, 'grower', $2, $3)",
			[personId, operationId, revoked],
		);
	}
	const people = await asDesk(iowa, (trx) => listGrantees(trx, operationId));
	expect(people.map(({ name }) => name)).toEqual(["Rosa"]);
});

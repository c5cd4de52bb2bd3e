import type { Client } from "pg";
import { afterAll, beforeAll, expect, test } from "vitest";
import { GrantForm, grantRole, listPeople, revokeGrant } from "#app/auth/grants.server.ts";
import { scopedTransaction, type Trx } from "#app/auth/scope.server.ts";
import type { Coordinator } from "#app/auth/viewer.ts";
import { createTestDatabase } from "#tests/helpers/database.ts";
import { addOperation, addPerson, connectOwner, count, loadPlaces, useDatabase } from "./surveys-fixture.ts";

let database: Awaited<ReturnType<typeof createTestDatabase>>;
let owner: Client;
let coordinator: Coordinator;

beforeAll(async () => {
	database = await createTestDatabase();
	useDatabase(database);
	owner = await connectOwner(database.ownerUrl);
	await loadPlaces(owner);
	coordinator = { ...(await addPerson(owner, "The coordinator", [])), role: "coordinator" } as unknown as Coordinator;
});
afterAll(async () => {
	await owner.end();
	await database.drop();
});

/** As the coordinator's guard opens a transaction: a desk without a state. */
const asCoordinator = <T>(work: (trx: Trx) => Promise<T>) => scopedTransaction({ kind: "desk", stateFips: [] }, work);
const grant = (personId: string, operation?: string) => {
	const form = GrantForm.parse({ step: "grant", role: "grower", personId, operation });
	if (form.step !== "grant") throw new Error("not a grant");
	return asCoordinator((trx) => grantRole(trx, coordinator, form));
};
const held = (personId: string) =>
	count(owner, "auth.role_grant where person_id = $1 and role = 'grower' and revoked_at is null", [personId]);
const person = async () => (await addPerson(owner, "Wilma Teagarden", [])).personId;

test("a grower's grant names one operation, by its e-mail address in any case or by its id", async () => {
	const operationId = await addOperation(owner, {
		state: "19",
		name: "Quail Bend Orchard",
		email: "Wilma@quail.example",
	});
	const [byEmail, byId] = [await person(), await person()];
	expect(await grant(byEmail, " wilma@QUAIL.example ")).toBe("granted");
	expect(await grant(byEmail, operationId)).toBe("granted");
	expect(await grant(byId, operationId)).toBe("granted");
	expect([await held(byEmail), await held(byId)]).toEqual([1, 1]);

	const people = await asCoordinator((trx) => listPeople(trx, coordinator));
	const [given] = people.find((one) => one.personId === byId)!.grants;
	expect(given).toMatchObject({ role: "grower", operationId, operationName: "Quail Bend Orchard", stateFips: null });
	const { rows } = await owner.query("select state_fips, detail from log.event where subject_id = $1", [byId]);
	expect(rows).toEqual([{ state_fips: "19", detail: { role: "grower" } }]);
	expect(await asCoordinator((trx) => revokeGrant(trx, coordinator, given!.roleGrantId))).toBe("revoked");
	expect(await held(byId)).toBe(0);
});

test("nothing is granted for no operation, an unknown one, or an address that several have", async () => {
	for (const state of ["19", "55"] as const) await addOperation(owner, { state, email: "two@farms.example" });
	const personId = await person();
	expect(await grant(personId)).toBe("operation_needed");
	expect(await grant(personId, "nobody@farms.example")).toBe("operation_unknown");
	expect(await grant(personId, "%@farms.example")).toBe("operation_unknown");
	expect(await grant(personId, crypto.randomUUID())).toBe("operation_unknown");
	expect(await grant(personId, "two@farms.example")).toBe("operation_several");
	expect(await held(personId)).toBe(0);
});

test("granting opens the directory to the coordinator for nothing else", async () => {
	const operationId = await addOperation(owner, { state: "55", email: "only@farms.example" });
	const personId = await person();
	const seen = await asCoordinator(async (trx) => {
		const form = { step: "grant", role: "grower", personId, operation: "only@farms.example" } as const;
		await grantRole(trx, coordinator, form);
		await listPeople(trx, coordinator);
		return trx.selectFrom("directory.operation").select("operation_id").execute();
	});
	expect(seen).toEqual([]);
	expect(await held(personId)).toBe(1);
	expect(await count(owner, "directory.operation where operation_id = $1", [operationId])).toBe(1);
});

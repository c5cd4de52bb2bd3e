import type { Client } from "pg";
import { afterAll, beforeAll, expect, test } from "vitest";
import type { Associate } from "#app/auth/viewer.ts";
import { countMailings, sendInvitations } from "#app/collect/invitations.server.ts";
import { markReachable, markReturned } from "#app/collect/reach.server.ts";
import { mendAddress } from "#app/directory/mail-address.server.ts";
import { createTestDatabase, type TestDatabase } from "#tests/helpers/database.ts";
import { findMailingRow, inviteGrower } from "./mail-fixture.ts";
import { addOperation, addPerson, asDesk, connectOwner, loadPlaces, useDatabase } from "./surveys-fixture.ts";

let database: TestDatabase;
let owner: Client;
let iowa: Associate;

beforeAll(async () => {
	database = await createTestDatabase();
	useDatabase(database);
	owner = await connectOwner(database.ownerUrl);
	await loadPlaces(owner);
	iowa = await addPerson(owner, "Iowa's associate", ["19"]);
});
afterAll(async () => {
	await owner.end();
	await database.drop();
});

const mend = (operationId: string, email: string | null) =>
	asDesk(iowa, (trx) => mendAddress(trx, iowa, operationId, email));

test("an address mended at the desk is invited again, and the log says by whom and not to what", async () => {
	const { mailingId, surveyId, operationId } = await inviteGrower(owner, iowa);
	await owner.query("update collect.mailing set failed_at = now(), failure = 'returned' where mailing_id = $1", [
		mailingId,
	]);
	await asDesk(iowa, (trx) => markReturned(trx, { surveyId, operationId, email: "ada@quailbend.example" }));
	const counts = () => asDesk(iowa, (trx) => countMailings(trx, iowa, surveyId));
	expect(await counts()).toMatchObject({ toInvite: 0 });
	await asDesk(iowa, async (trx) => {
		expect(await mendAddress(trx, iowa, operationId, "new@quailbend.example")).toBe("mended");
		await markReachable(trx, operationId);
	});
	expect(await findMailingRow(owner, mailingId)).toMatchObject({ mail_returned_at: null, disposition: "not_reached" });
	expect(await counts()).toMatchObject({ toInvite: 1 });
	expect(await asDesk(iowa, (trx) => sendInvitations(trx, iowa, surveyId))).toEqual({ queued: 1 });
	const { rows } = await owner.query("select * from log.event where action = 'operation.address_mended'");
	expect(rows).toMatchObject([{ subject_id: operationId, person_id: iowa.personId, state_fips: "19" }]);
	expect(JSON.stringify(rows)).not.toContain("quailbend");
});

test("an address in another state, or of who has left, is not found; the same one changes nothing", async () => {
	const elsewhere = await addOperation(owner, { state: "55" });
	const left = await addOperation(owner, { state: "19", status: "left" });
	const mine = await addOperation(owner, { state: "19" });
	expect(await mend(elsewhere, "spy@elsewhere.example")).toBe("not_found");
	expect(await mend(left, "spy@elsewhere.example")).toBe("not_found");
	expect(await mend(mine, "ada@quailbend.example")).toBe("unchanged");
	expect(await mend(mine, null)).toBe("mended");
	const { rows } = await owner.query("select email from directory.operation where operation_id = any ($1)", [
		[elsewhere, left, mine],
	]);
	expect(rows.map(({ email }) => email).toSorted()).toEqual(["ada@quailbend.example", "ada@quailbend.example", null]);
});

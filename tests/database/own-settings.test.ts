import type { Client } from "pg";
import { afterAll, beforeAll, expect, test } from "vitest";
import { scopedTransaction } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { countInvited, countMailings, sendInvitations, sendReminders } from "#app/collect/invitations.server.ts";
import { sendNewLink } from "#app/collect/new-link.server.ts";
import { listOwnConsents } from "#app/collect/own-consents.server.ts";
import { findMailing, reasonNotToSend } from "#app/collect/survey-mailing.server.ts";
import { findOwnSettings, type OwnSettings, saveOwnSettings } from "#app/directory/own-settings.server.ts";
import { createTestDatabase } from "#tests/helpers/database.ts";
import { answeringOf, asGrower, askGrower, growerOf, linkOf, submit, typeStep, pounds } from "./answering-fixture.ts";
import { addOperation, addPerson, asDesk, connectOwner, count, loadPlaces, useDatabase } from "./surveys-fixture.ts";

let database: Awaited<ReturnType<typeof createTestDatabase>>;
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

const settings = (more: Partial<OwnSettings> = {}): OwnSettings => ({
	contactName: "Rosa Quill",
	email: "rosa@quailbend.example",
	phone: "555 0100",
	language: "es",
	massUnit: "kg",
	mailWanted: true,
	...more,
});
const save = (operationId: string, to: OwnSettings, viewer = growerOf(operationId)) =>
	asGrower(viewer, (trx) => saveOwnSettings(trx, viewer, operationId, to));
const read = (operationId: string, viewer = growerOf(operationId)) =>
	asGrower(viewer, (trx) => findOwnSettings(trx, viewer, operationId));

test("settings are read back as they were saved, and a survey follows them", async () => {
	const { place, grower } = await askGrower(owner, iowa);
	expect(await save(place.operationId, settings())).toBe("address_mended");
	expect(await save(place.operationId, settings())).toBe("saved");
	expect((await read(place.operationId))?.settings).toEqual(settings());
	expect(await answeringOf(grower, place)).toMatchObject({ language: "es", massUnit: "kg" });
	await save(place.operationId, settings({ email: null, phone: null }));
	expect((await read(place.operationId))?.settings).toMatchObject({ email: null, phone: null });
});

test("who wants no survey mail is neither invited nor reminded nor counted, and gets the receipt all the same", async () => {
	await owner.query("update directory.operation set status = 'left'");
	const { place, grower, step } = await askGrower(owner, iowa);
	const { surveyId, operationId } = place;
	const counts = () => asDesk(iowa, (trx) => countMailings(trx, iowa, surveyId));
	const reasons = () =>
		scopedTransaction({ kind: "network" }, async (trx) => {
			const { rows } = await owner.query("select mailing_id, kind from collect.mailing where survey_id = $1", [
				surveyId,
			]);
			const found = await Promise.all(rows.map((row) => findMailing(trx, row.mailing_id)));
			return found.map((mailing) => `${mailing!.kind}: ${reasonNotToSend(mailing!)}`).toSorted();
		});
	await save(operationId, settings({ mailWanted: false }));
	expect(await counts()).toMatchObject({ toInvite: 0, toRemind: 0 });
	expect(await asDesk(iowa, (trx) => sendInvitations(trx, iowa, surveyId))).toEqual({ queued: 0 });
	expect(await asDesk(iowa, (trx) => sendNewLink(trx, iowa, surveyId, operationId, 1))).toBe("not_wanted");

	await save(operationId, settings());
	expect(await counts()).toMatchObject({ toInvite: 1 });
	expect(await asDesk(iowa, (trx) => sendInvitations(trx, iowa, surveyId))).toEqual({ queued: 1 });
	// Decided before the grower said no, and not yet sent.
	await save(operationId, settings({ mailWanted: false }));
	expect(await reasons()).toEqual(["invitation: not_wanted"]);
	expect(await counts()).toMatchObject({ toInvite: 0, toRemind: 0 });
	expect(await asDesk(iowa, (trx) => countInvited(trx, iowa, surveyId))).toBe(1);
	expect(await asDesk(iowa, (trx) => sendReminders(trx, iowa, surveyId, 1))).toEqual({ queued: 0 });

	await typeStep(grower, place, step, pounds(40, 4000, 4000));
	expect(await submit(grower, place)).toMatchObject({ outcome: "submitted" });
	expect(await reasons()).toEqual(["invitation: not_wanted", "receipt: null"]);
});

test("consents are listed with their version and day, a grower's own only", async () => {
	const { place } = await askGrower(owner, iowa);
	const consents = (viewer = growerOf(place.operationId)) =>
		asGrower(viewer, (trx) => listOwnConsents(trx, viewer, place.operationId));
	expect(await consents()).toMatchObject([
		{ surveyId: place.surveyId, season: 2031, pledgeVersion: "2026-1", pledgedAt: expect.any(Date) },
	]);
	expect(await consents(growerOf(await addOperation(owner, { state: "19" })))).toEqual([]);
	expect(await consents(linkOf(place))).toEqual([]);
});

test("another grower's settings are neither read nor saved, though they are there, and a personal link opens none", async () => {
	const mine = await addOperation(owner, { state: "19" });
	const theirs = await addOperation(owner, { state: "19", contact: "Ada Quill" });
	for (const viewer of [growerOf(mine), linkOf({ surveyId: crypto.randomUUID(), operationId: theirs })]) {
		expect(await read(theirs, viewer)).toBeUndefined();
		expect(await save(theirs, settings(), viewer)).toBe("not_found");
	}
	expect(
		await count(owner, "directory.operation where operation_id = $1 and contact_name = 'Ada Quill'", [theirs]),
	).toBe(1);
});

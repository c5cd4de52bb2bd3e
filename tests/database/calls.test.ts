import { describe, expect, test } from "vitest";
import type { Associate } from "#app/auth/viewer.ts";
import { countDueCalls, findCall, listCalls } from "#app/collect/calls.server.ts";
import { takeBackNote } from "#app/collect/contact-undo.server.ts";
import { CallQuery, ContactForm } from "#app/collect/contacts.schema.ts";
import { listContacts, noteContact } from "#app/collect/contacts.server.ts";
import { openSurvey } from "#app/collect/survey-opening.server.ts";
import { createSurvey } from "#app/collect/surveys.server.ts";
import { readCallWorth } from "#app/routes/desk/parts/calls/call-worth.server.ts";
import { addOperation, answerFor, asDesk, count, draftOf, openSurveysDatabase } from "./surveys-fixture.ts";

const { owner, iowa, wisconsin, both } = await openSurveysDatabase();

/** A survey of its own: whoever was there before has left. */
async function ask(operations: { name: string; state?: "19" | "55"; county?: string; trees?: number }[]) {
	await owner.query("update directory.operation set status = 'left' where status = 'active'");
	const ids: Record<string, string> = {};
	for (const { name, state = "19", county, trees } of operations) {
		ids[name] = await addOperation(owner, { state, name, trees });
		if (county)
			await owner.query("update directory.operation set county_fips = $2 where operation_id = $1", [ids[name], county]);
	}
	const made = await asDesk(both, (trx) => createSurvey(trx, both, draftOf(["19", "55"])));
	const { surveyId } = made as { surveyId: string };
	await asDesk(both, (trx) => openSurvey(trx, both, surveyId));
	return { surveyId, ids };
}

function callsOf(viewer: Associate, surveyId: string, query: Record<string, string> = {}) {
	return asDesk(viewer, async (trx) => {
		const cells = await readCallWorth(trx, viewer, surveyId);
		return listCalls(trx, viewer, surveyId, CallQuery.parse(query), cells ?? []);
	});
}
const namesOf = async (...given: Parameters<typeof callsOf>) => (await callsOf(...given)).rows.map(({ name }) => name);

function note(viewer: Associate, operationId: string, more: Record<string, string>) {
	const contact = ContactForm.parse({ way: "telephone", ...more });
	return asDesk(viewer, (trx) => noteContact(trx, viewer, operationId, contact));
}

async function dispositionOf(surveyId: string, operationId: string): Promise<string> {
	const { rows } = await owner.query(
		"select disposition from collect.frame_operation where survey_id = $1 and operation_id = $2",
		[surveyId, operationId],
	);
	return rows[0].disposition as string;
}

const day = (days: number) =>
	new Intl.DateTimeFormat("sv-SE", { timeZone: "America/Chicago" }).format(Date.now() + days * 86_400_000);

describe("whom to ring next", () => {
	test("those of the county and size with fewest answers come first, larger orchards before smaller", async () => {
		const { surveyId, ids } = await ask([
			...["a", "b", "c", "d"].map((name) => ({ name: `told ${name}`, county: "19103" })),
			{ name: "Of a told county", county: "19103", trees: 40 },
			{ name: "Small of a silent county", county: "19013", trees: 30 },
			{ name: "Middling of a silent county", county: "19013", trees: 90 },
			{ name: "Another of a silent county", county: "19013", trees: 40 },
			{ name: "One more of a silent county", county: "19013", trees: 40 },
			{ name: "Last of a silent county", county: "19013", trees: 20 },
		]);
		for (const name of ["a", "b", "c", "d"]) await answerFor(owner, surveyId, ids[`told ${name}`]!);
		const { rows, total } = await callsOf(iowa, surveyId);
		expect(total).toBe(6);
		expect(rows[0]).toMatchObject({ name: "Middling of a silent county", answeredHere: 0, askedHere: 5 });
		expect(rows.at(-1)).toMatchObject({ name: "Of a told county", answeredHere: 4, askedHere: 5 });
		expect(rows.map(({ bearingTrees }) => bearingTrees)).toEqual([90, 40, 40, 30, 20, 40]);
	});

	test("who has answered, refused, left or does not belong is not rung", async () => {
		const { surveyId, ids } = await ask(
			["answered", "refused", "gone", "left", "waits", "came back"].map((name) => ({ name })),
		);
		await answerFor(owner, surveyId, ids.answered!);
		await note(iowa, ids.refused!, { surveyId, outcome: "refused" });
		await note(iowa, ids.gone!, { surveyId, outcome: "not_eligible" });
		await owner.query("update directory.operation set status = 'left' where operation_id = $1", [ids.left]);
		await owner.query("update collect.frame_operation set disposition = 'undeliverable' where operation_id = $1", [
			ids["came back"],
		]);
		expect((await namesOf(iowa, surveyId)).toSorted()).toEqual(["came back", "waits"]);
	});

	test("a paper form that came in is found by its number", async () => {
		const { surveyId, ids } = await ask([{ name: "sent paper" }, { name: "did not" }]);
		expect(await namesOf(iowa, surveyId, { q: ids["sent paper"]!.slice(0, 8).toUpperCase() })).toEqual(["sent paper"]);
	});
});

describe("what a call came to", () => {
	test("an outcome that means a disposition sets it, in that survey alone", async () => {
		const { surveyId, ids } = await ask([{ name: "spoke" }, { name: "declined" }]);
		const made = await asDesk(both, (trx) => createSurvey(trx, both, draftOf(["19", "55"])));
		const other = (made as { surveyId: string }).surveyId;
		await asDesk(both, (trx) => openSurvey(trx, both, other));
		expect(await note(iowa, ids.spoke!, { surveyId, outcome: "reached" })).toBe("noted");
		expect(await note(iowa, ids.declined!, { surveyId, outcome: "refused" })).toBe("noted");
		expect(await dispositionOf(surveyId, ids.spoke!)).toBe("reached");
		expect(await dispositionOf(surveyId, ids.declined!)).toBe("refused");
		expect(await dispositionOf(other, ids.spoke!)).toBe("not_reached");
		expect(await dispositionOf(other, ids.declined!)).toBe("not_reached");
	});

	test("taken back by whoever noted it, as it was before; a note that is not the newest own one stays", async () => {
		const { surveyId, ids } = await ask([{ name: "wrong row" }]);
		const operationId = ids["wrong row"]!;
		const takeBack = (viewer: Associate) =>
			asDesk(viewer, (trx) => takeBackNote(trx, viewer, { surveyId, operationId }));
		await note(iowa, operationId, { surveyId, outcome: "reached" });
		await owner.query("update collect.contact set made_at = made_at - interval '2 hours' where operation_id = $1", [
			operationId,
		]);
		await note(iowa, operationId, { surveyId, outcome: "refused" });
		expect(await namesOf(iowa, surveyId)).toEqual([]);
		expect([await takeBack(wisconsin), await takeBack(both)]).toEqual(["stays", "stays"]);
		expect(await takeBack(iowa)).toBe("taken_back");
		expect(await dispositionOf(surveyId, operationId)).toBe("reached");
		expect(await namesOf(iowa, surveyId)).toEqual(["wrong row"]);
		// The one before is too old.
		expect(await takeBack(iowa)).toBe("stays");
		await owner.query("update collect.contact set made_at = now() where operation_id = $1", [operationId]);
		expect(await takeBack(iowa)).toBe("taken_back");
		expect(await dispositionOf(surveyId, operationId)).toBe("not_reached");
		expect(await asDesk(iowa, (trx) => listContacts(trx, operationId))).toEqual([]);
	});

	test("without a survey, or when nobody was reached, every disposition stays", async () => {
		const { surveyId, ids } = await ask([{ name: "silent" }]);
		await note(iowa, ids.silent!, { outcome: "refused" });
		await note(iowa, ids.silent!, { surveyId, outcome: "no_answer" });
		await note(iowa, ids.silent!, { surveyId, outcome: "wrong_number" });
		expect(await dispositionOf(surveyId, ids.silent!)).toBe("not_reached");
		expect(await asDesk(iowa, (trx) => listContacts(trx, ids.silent!))).toHaveLength(3);
	});

	test("once a release is drafted the frame stays as it was drafted, and the call is noted all the same", async () => {
		const { surveyId, ids } = await ask([{ name: "late word" }]);
		await owner.query("insert into collect.release_draft (survey_id, rules, drafted_by) values ($1, '{}', $2)", [
			surveyId,
			iowa.personId,
		]);
		expect(await note(iowa, ids["late word"]!, { surveyId, outcome: "not_eligible" })).toBe("noted");
		expect(await dispositionOf(surveyId, ids["late word"]!)).toBe("not_reached");
		expect(await asDesk(iowa, (trx) => listContacts(trx, ids["late word"]!))).toHaveLength(1);
	});
});

describe("what was promised", () => {
	test("is due on its day and after it, stands first then, and not in the list before", async () => {
		const { surveyId, ids } = await ask(["today", "yesterday", "tomorrow", "never rung"].map((name) => ({ name })));
		for (const [name, days] of [
			["today", 0],
			["yesterday", -1],
			["tomorrow", 1],
		] as const)
			await note(iowa, ids[name]!, { surveyId, outcome: "call_back", nextOn: day(days), nextTime: "14:30" });
		expect(await namesOf(iowa, surveyId)).toEqual(["yesterday", "today", "never rung"]);
		expect(await namesOf(iowa, surveyId, { show: "due" })).toEqual(["yesterday", "today"]);
		expect(await namesOf(iowa, surveyId, { show: "later" })).toEqual(["tomorrow"]);
		expect(await asDesk(iowa, (trx) => countDueCalls(trx, iowa, surveyId))).toBe(2);
		expect((await callsOf(iowa, surveyId)).rows[1]).toMatchObject({ due: true, nextOn: day(0), nextTime: "14:30" });
	});

	test("the newest word counts: a later call without a day ends what was promised before", async () => {
		const { surveyId, ids } = await ask([{ name: "rung twice" }, { name: "not yet rung" }]);
		await note(iowa, ids["rung twice"]!, { surveyId, outcome: "call_back", nextOn: day(0) });
		await owner.query("update collect.contact set made_at = made_at - interval '1 hour'");
		await note(iowa, ids["rung twice"]!, { surveyId, outcome: "no_answer", note: "rang long" });
		expect(await asDesk(iowa, (trx) => countDueCalls(trx, iowa, surveyId))).toBe(0);
		// Tried today already: others come first.
		expect(await namesOf(iowa, surveyId)).toEqual(["not yet rung", "rung twice"]);
	});

	test("answers that came in since end it", async () => {
		const { surveyId, ids } = await ask([{ name: "answered since" }]);
		await note(iowa, ids["answered since"]!, { surveyId, outcome: "call_back", nextOn: day(0) });
		expect(await asDesk(iowa, (trx) => countDueCalls(trx, iowa, surveyId))).toBe(1);
		await answerFor(owner, surveyId, ids["answered since"]!);
		expect(await asDesk(iowa, (trx) => countDueCalls(trx, iowa, surveyId))).toBe(0);
	});
});

test("another state's growers are neither listed nor found, and nothing can be noted of them", async () => {
	const { surveyId, ids } = await ask([{ name: "of Iowa" }, { name: "of Wisconsin", state: "55" }]);
	const operationId = ids["of Wisconsin"]!;
	await note(wisconsin, operationId, { surveyId, outcome: "call_back", nextOn: day(0) });
	expect(await count(owner, "collect.contact where operation_id = $1", [operationId])).toBe(1);
	expect(await namesOf(wisconsin, surveyId)).toEqual(["of Wisconsin"]);

	expect(await namesOf(iowa, surveyId, { show: "all" })).toEqual(["of Iowa"]);
	expect(await asDesk(iowa, (trx) => countDueCalls(trx, iowa, surveyId))).toBe(0);
	expect(await asDesk(iowa, (trx) => findCall(trx, iowa, { surveyId, operationId }))).toBeUndefined();
	expect(await note(iowa, operationId, { surveyId, outcome: "refused" })).toBe("not_found");
	expect(await dispositionOf(surveyId, operationId)).toBe("reached");
});

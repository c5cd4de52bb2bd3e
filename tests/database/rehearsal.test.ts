import { sql } from "kysely";
import { beforeAll, expect, test } from "vitest";
import { scopedTransaction, type Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { listFrame } from "#app/collect/frame-list.server.ts";
import { FrameQuery } from "#app/collect/desk-lists.schema.ts";
import { countMailings, sendInvitations } from "#app/collect/invitations.server.ts";
import { findLink } from "#app/collect/personal-link.server.ts";
import {
	discardRehearsal,
	findRehearsal,
	linkTestGrower,
	listTestGrowers,
	rehearseSurvey,
} from "#app/collect/rehearsal.server.ts";
import { listBarSurveys } from "#app/collect/season-bar.server.ts";
import { closeSurvey, openSurvey } from "#app/collect/survey-opening.server.ts";
import { createSurvey, findRealSurvey, findSurvey, listSurveys } from "#app/collect/surveys.server.ts";
import { listFileRows } from "#app/directory/grower-file.server.ts";
import { listLikelyPairs } from "#app/directory/merging/duplicates.server.ts";
import { findOperation } from "#app/directory/operations.server.ts";
import { OperationQuery } from "#app/directory/operation.schema.ts";
import { listByIds, listMatchingIds, listOperations } from "#app/directory/operation-list.server.ts";
import { createDraft } from "#app/release/drafts.server.ts";
import { addOperation, answerFor, asDesk, draftOf, openSurveysDatabase } from "./surveys-fixture.ts";

const { owner, iowa, wisconsin, both } = await openSurveysDatabase();
const nameOf = (number: number) => `Test orchard ${number}`;
const silent = async () => {};
let open: string;

/** As the desk's guard opens a transaction for an address that names a survey. */
const inHand = <T>(viewer: Associate, surveyId: string, work: (trx: Trx) => Promise<T>) =>
	scopedTransaction({ kind: "desk", stateFips: viewer.stateFips, surveyId }, work);

async function makeDraft(viewer: Associate, states: string[]) {
	const made = await asDesk(viewer, (trx) => createSurvey(trx, viewer, draftOf(states)));
	if (!made.surveyId) throw new Error("the survey was not made");
	return made.surveyId;
}

async function rehearse(viewer: Associate, surveyId: string) {
	const made = await inHand(viewer, surveyId, (trx) => rehearseSurvey(trx, viewer, surveyId, nameOf));
	if (typeof made === "string") throw new Error(made);
	return made.rehearsalId;
}

const testGrowers = (viewer: Associate, rehearsalId: string) =>
	inHand(viewer, rehearsalId, (trx) => listTestGrowers(trx, viewer, rehearsalId));

/** What sending in leaves: a response, its facts, which count in the tallies, and what a check found odd. */
async function answer(rehearsalId: string) {
	const growers = await testGrowers(iowa, rehearsalId);
	for (const { operationId } of growers) {
		await answerFor(owner, rehearsalId, operationId);
		await owner.query(
			`insert into collect.fact (survey_id, measure_key, crop_key, operation_id, owner_id, county_fips, state_fips, stratum_key, y, x)
			select survey_id, 'loss_share', 'apple', operation_id, owner_id, county_fips, state_fips, stratum_key, 10, 40
			from collect.frame_operation where survey_id = $1 and operation_id = $2`,
			[rehearsalId, operationId],
		);
		await owner.query(
			`insert into collect.edit_finding (response_id, check_kind, check_key, question_key, about, about_key)
			select response_id, 'range', 'range', 'harvested', '[]', 'odd' from collect.response
			where survey_id = $1 and operation_id = $2`,
			[rehearsalId, operationId],
		);
	}
}

beforeAll(async () => {
	for (const name of ["Quail Bend Orchard", "Quail Bend Orchards", "Sumac Ridge"])
		await addOperation(owner, { state: "19", name, email: `${name.replaceAll(" ", "")}@farm.example` });
	await addOperation(owner, { state: "55", email: null });
	open = await makeDraft(iowa, ["19"]);
	expect(await asDesk(iowa, (trx) => openSurvey(trx, iowa, open, silent))).toBe("opened");
});

/** What lists, frames, exports, mail and jobs show to whoever has no rehearsal in hand. */
async function seen() {
	const query = OperationQuery.parse({});
	const desk = await inHand(iowa, open, async (trx) => {
		const ids = await listMatchingIds(trx, iowa, query);
		return {
			growers: await listOperations(trx, iowa, query),
			found: await listOperations(trx, iowa, OperationQuery.parse({ q: "Test orchard" })),
			file: await listFileRows(trx, await listByIds(trx, iowa, ids)),
			pairs: await listLikelyPairs(trx, iowa),
			surveys: await listSurveys(trx, iowa),
			bar: await listBarSurveys(trx, iowa),
			frame: await listFrame(trx, iowa, open, FrameQuery.parse({})),
			mails: await countMailings(trx, iowa, open),
		};
	});
	const counts = await scopedTransaction({ kind: "network" }, async (trx) => {
		const { rows } = await sql`select (select count(*) from collect.survey) as surveys,
			(select count(*) from directory.operation) as operations, (select count(*) from directory.planting) as plantings,
			(select count(*) from collect.frame_operation) as frames, (select count(*) from collect.frame_crop) as crops,
			(select count(*) from collect.response) as responses, (select count(*) from collect.fact) as facts,
			(select count(*) from collect.mailing) as mailings`.execute(trx);
		return rows[0];
	});
	return { desk, counts };
}

/** Every row of every table by table, but for the log's, which only grows. */
async function rowsOfAll(): Promise<Record<string, number>> {
	const { rows } = await owner.query(
		`select n.nspname || '.' || c.relname as name from pg_class c join pg_namespace n on n.oid = c.relnamespace
		where c.relkind = 'r' and n.nspname in ('directory', 'collect', 'release', 'publish', 'auth') order by 1`,
	);
	const counted: Record<string, number> = {};
	for (const { name } of rows) counted[name] = (await owner.query(`select count(*)::int as n from ${name}`)).rows[0].n;
	return counted;
}

test("lists, frames, exports and mail show the same with a rehearsal as without, and discarding leaves no row", async () => {
	const draft = await makeDraft(iowa, ["19"]);
	const [before, rows] = [await seen(), await rowsOfAll()];
	const rehearsalId = await rehearse(iowa, draft);
	await answer(rehearsalId);
	const growers = await testGrowers(iowa, rehearsalId);
	expect(growers).toHaveLength(6);
	const now = await rowsOfAll();
	for (const table of [
		"directory.operation",
		"collect.response",
		"collect.fact",
		"collect.tally",
		"collect.edit_finding",
	])
		expect(now[table]).toBeGreaterThan(rows[table]!);
	expect(await seen()).toEqual(before);

	// And a frame that is frozen meanwhile holds none of them.
	const other = await makeDraft(iowa, ["19"]);
	expect(await inHand(iowa, other, (trx) => openSurvey(trx, iowa, other, silent))).toBe("opened");
	const { rows: frame } = await owner.query(
		`select count(*)::int as all, count(o.rehearsal_id)::int as invented from collect.frame_operation f
		join directory.operation o using (operation_id) where f.survey_id = $1`,
		[other],
	);
	expect(frame).toEqual([{ all: 3, invented: 0 }]);
	await owner.query("delete from collect.frame_crop where survey_id = $1", [other]);
	await owner.query("delete from collect.frame_operation where survey_id = $1", [other]);
	await owner.query("delete from collect.survey where survey_id = $1", [other]);

	const gone = await inHand(iowa, rehearsalId, (trx) => discardRehearsal(trx, iowa, rehearsalId));
	expect(gone).toEqual({ surveyId: draft });
	expect(await rowsOfAll()).toEqual(rows);
	expect(await inHand(iowa, rehearsalId, (trx) => discardRehearsal(trx, iowa, rehearsalId))).toBe("not_found");
});

test("a rehearsal is seen by who has it in hand, with its answers, and its growers are on no page of their own", async () => {
	const draft = await makeDraft(iowa, ["19"]);
	const rehearsalId = await rehearse(iowa, draft);
	await answer(rehearsalId);
	expect(await inHand(iowa, draft, (trx) => findRehearsal(trx, iowa, draft))).toBe(rehearsalId);
	expect(await inHand(iowa, draft, (trx) => findSurvey(trx, iowa, rehearsalId))).toBeUndefined();
	expect(await inHand(iowa, rehearsalId, (trx) => findSurvey(trx, iowa, rehearsalId))).toMatchObject({
		rehearsalOf: draft,
		state: "open",
		inFrame: 6,
		answered: 6,
	});
	// Pages that mail, plan and release find the survey and not its rehearsal.
	expect(await inHand(iowa, rehearsalId, (trx) => findRealSurvey(trx, iowa, rehearsalId))).toBeUndefined();
	expect(await inHand(iowa, draft, (trx) => findRealSurvey(trx, iowa, draft))).toMatchObject({ surveyId: draft });
	const [first] = await testGrowers(iowa, rehearsalId);
	const page = (trx: Trx) => findOperation(trx, iowa, first!.operationId);
	expect(await inHand(iowa, rehearsalId, page)).toBeUndefined();
	const theirs = (trx: Trx) => findSurvey(trx, wisconsin, rehearsalId);
	expect(await inHand(wisconsin, rehearsalId, theirs)).toBeUndefined();
});

test("its links open the growers' pages, go to nobody, and end with it", async () => {
	const draft = await makeDraft(iowa, ["19"]);
	const rehearsalId = await rehearse(iowa, draft);
	const [first] = await testGrowers(iowa, rehearsalId);
	const place = { surveyId: rehearsalId, operationId: first!.operationId };
	const link = await inHand(iowa, rehearsalId, (trx) => linkTestGrower(trx, iowa, place));
	if (typeof link === "string") throw new Error(link);
	const opened = () => scopedTransaction({ kind: "network" }, (trx) => findLink(trx, link.token));
	expect(await opened()).toMatchObject({ ...place, operationName: "Test orchard 1" });
	expect(await inHand(iowa, rehearsalId, (trx) => sendInvitations(trx, iowa, rehearsalId))).toEqual({ queued: 0 });
	expect(await inHand(iowa, open, (trx) => linkTestGrower(trx, iowa, { ...place, surveyId: open }))).toBe("not_found");
	await inHand(iowa, rehearsalId, (trx) => discardRehearsal(trx, iowa, rehearsalId));
	expect(await opened()).toBeUndefined();
});

test("making it again begins anew, and opening the survey itself ends it", async () => {
	const draft = await makeDraft(iowa, ["19"]);
	const first = await rehearse(iowa, draft);
	await answer(first);
	const second = await rehearse(iowa, draft);
	expect(second).not.toBe(first);
	expect(await inHand(iowa, second, (trx) => findSurvey(trx, iowa, second))).toMatchObject({ answered: 0 });
	const { rows: left } = await owner.query("select survey_id from collect.survey where rehearsal_of = $1", [draft]);
	expect(left).toEqual([{ survey_id: second }]);
	expect(await inHand(iowa, draft, (trx) => openSurvey(trx, iowa, draft, silent))).toBe("opened");
	expect(await inHand(iowa, draft, (trx) => findRehearsal(trx, iowa, draft))).toBeNull();
	const again = (trx: Trx) => rehearseSurvey(trx, iowa, draft, nameOf);
	expect(await inHand(iowa, draft, again)).toBe("not_a_draft");
});

test("only who holds every state of a survey rehearses it or throws its rehearsal away", async () => {
	const draft = await makeDraft(both, ["19", "55"]);
	const tried = (trx: Trx) => rehearseSurvey(trx, iowa, draft, nameOf);
	expect(await inHand(iowa, draft, tried)).toBe("states_not_held");
	const rehearsalId = await rehearse(both, draft);
	const discarded = (trx: Trx) => discardRehearsal(trx, iowa, rehearsalId);
	expect(await inHand(iowa, rehearsalId, discarded)).toBe("states_not_held");
	const byHand = (trx: Trx) => sql`select collect.discard_rehearsal(${rehearsalId}::uuid)`.execute(trx);
	await expect(inHand(iowa, rehearsalId, byHand)).rejects.toThrow("no rehearsal to throw away");
	const states = (await testGrowers(both, rehearsalId)).map(({ statePostal }) => statePostal);
	expect(states.join(" ")).toBe("IA IA IA WI WI WI");
});

const refused = (query: string, values: unknown[], why: string) =>
	expect(owner.query(query, values)).rejects.toThrow(why);

test("the database lets no rehearsal be drafted, mailed or mixed with growers, whoever asks", async () => {
	const draft = await makeDraft(iowa, ["19"]);
	const rehearsalId = await rehearse(iowa, draft);
	await answer(rehearsalId);
	const [first] = await testGrowers(iowa, rehearsalId);
	expect(await inHand(iowa, rehearsalId, (trx) => closeSurvey(trx, iowa, rehearsalId))).toBe("closed");
	const drafted = (trx: Trx) => createDraft(trx, iowa, rehearsalId, {} as never);
	await expect(inHand(iowa, rehearsalId, drafted)).rejects.toThrow("a rehearsal has no release_draft");
	await refused(
		"insert into collect.release_draft (survey_id, rules, drafted_by) values ($1, '{}', $2)",
		[rehearsalId, iowa.personId],
		"a rehearsal has no release_draft",
	);
	await refused(
		"insert into collect.mailing (survey_id, operation_id, kind) values ($1, $2, 'invitation')",
		[rehearsalId, first!.operationId],
		"a rehearsal has no mailing",
	);
	await refused(
		"update directory.operation set email = 'a@b.example' where operation_id = $1",
		[first!.operationId],
		"operation_rehearsing_has_no_address",
	);
	const frame = `insert into collect.frame_operation (survey_id, operation_id, owner_id, county_fips, state_fips, size_class, stratum_key)
		select $1, operation_id, owner_id, county_fips, state_fips, 'small', 'IA-small' from directory.operation`;
	const oneKind = "a frame holds the operations of a rehearsal or none of them";
	await refused(`${frame} where operation_id = $2`, [open, first!.operationId], oneKind);
	await refused(`${frame} where rehearsal_id is null and state_fips = '19' and $2 <> ''`, [rehearsalId, "x"], oneKind);
	for (const [table, set] of [
		["directory.operation", "rehearsal_id = null where operation_id = $1"],
		["collect.survey", "rehearsal_of = null where survey_id = $1"],
	] as const)
		await refused(
			`update ${table} set ${set}`,
			[table === "collect.survey" ? rehearsalId : first!.operationId],
			"a rehearsal stays one",
		);
});

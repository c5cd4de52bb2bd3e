import { describe, expect, test } from "vitest";
import type { Associate } from "#app/auth/viewer.ts";
import { CountQuery, FrameQuery } from "#app/collect/desk-lists.schema.ts";
import { listFrame } from "#app/collect/frame-list.server.ts";
import { listCountyCounts } from "#app/collect/response-counts.server.ts";
import { openSurvey } from "#app/collect/survey-opening.server.ts";
import { createSurvey } from "#app/collect/surveys.server.ts";
import { listReleaseWork } from "#app/release/release-work.server.ts";
import {
	addOperation,
	answerFor,
	asDesk,
	count,
	draftOf,
	openSurveysDatabase,
	type NewOperation,
} from "./surveys-fixture.ts";

const { owner, iowa, wisconsin, both } = await openSurveysDatabase();

/** Opens a survey of both states over operations of its own: those of other tests grow no such crop. */
async function surveyOf(operations: NewOperation[], countyOf: (i: number) => string | null = () => null) {
	const crop = `crop_${"abcdefghij"[made++]}`;
	await owner.query("insert into directory.crop values ($1, $2, 'tree', null)", [crop, 100 + made]);
	const ids: string[] = [];
	for (const [i, operation] of operations.entries()) {
		const operationId = await addOperation(owner, { ...operation, crop });
		const county = countyOf(i);
		if (county)
			await owner.query("update directory.operation set county_fips = $1 where operation_id = $2", [
				county,
				operationId,
			]);
		ids.push(operationId);
	}
	const draft = draftOf(["19", "55"], { crops: [crop] });
	const { surveyId } = (await asDesk(both, (trx) => createSurvey(trx, both, draft))) as { surveyId: string };
	await asDesk(both, (trx) => openSurvey(trx, both, surveyId));
	return { surveyId, ids };
}
let made = 0;

const counts = (viewer: Associate, surveyId: string, query: Record<string, unknown> = {}) =>
	asDesk(viewer, (trx) => listCountyCounts(trx, viewer, surveyId, CountQuery.parse(query)));

describe("counts by county", () => {
	test("tell asked and answered of granted states only", async () => {
		const five = Array.from({ length: 5 }, (): NewOperation => ({ state: "19" }));
		const { surveyId, ids } = await surveyOf([...five, { state: "55" }], (i) => (i < 2 ? "19001" : null));
		await answerFor(owner, surveyId, ids[0]!);
		await answerFor(owner, surveyId, ids[2]!);
		// Begun and not sent in: no answer yet.
		await owner.query(
			`insert into collect.response (survey_id, operation_id, state_fips, language, pledge_version)
			values ($1, $2, '19', 'en', '1')`,
			[surveyId, ids[3]],
		);
		await answerFor(owner, surveyId, ids[5]!);

		const seen = await counts(iowa, surveyId);
		expect(seen.rows).toEqual([
			{ countyFips: "19001", countyName: "Adair", stateFips: "19", asked: 2, answered: 1, share: 50 },
			{ countyFips: "19103", countyName: "Johnson", stateFips: "19", asked: 3, answered: 1, share: 100 / 3 },
		]);
		expect((await counts(wisconsin, surveyId)).rows).toMatchObject([{ countyFips: "55025", asked: 1, answered: 1 }]);
		expect((await counts(both, surveyId)).total).toBe(3);
		const byShare = await counts(both, surveyId, { sort: "share", direction: "desc" });
		expect(byShare.rows.map((row) => row.countyFips)).toEqual(["55025", "19001", "19103"]);
	});

	test("come in pages of fifty without losing a county", async () => {
		const { rows: counties } = await owner.query<{ county_fips: string }>(
			"select county_fips from directory.county where state_fips = '19' order by 1 limit 52",
		);
		const { surveyId } = await surveyOf(
			counties.map(() => ({ state: "19" })),
			(i) => counties[i]!.county_fips,
		);
		const pages = [
			await counts(iowa, surveyId, { sort: "asked" }),
			await counts(iowa, surveyId, { sort: "asked", page: 2 }),
		];
		expect(pages.map((page) => page.rows.length)).toEqual([50, 2]);
		expect(new Set(pages.flatMap((page) => page.rows.map((row) => row.countyFips))).size).toBe(52);
		expect((await counts(iowa, surveyId, { page: 9 })).page).toBe(2);
	});
});

test("a closed survey waits for its release until one is approved, and only in its own states", async () => {
	const { surveyId } = await surveyOf([{ state: "19" }]);
	const work = async (viewer: Associate) =>
		(await asDesk(viewer, (trx) => listReleaseWork(trx, viewer))).find((row) => row.surveyId === surveyId)?.work;
	const draft = (status: string, audit: string | null = null) =>
		owner.query(
			`insert into collect.release_draft (survey_id, status, rules, audit, drafted_by, drafted_at)
			values ($1, $2, '{}', $3, $4, clock_timestamp())`,
			[surveyId, status, audit, both.personId],
		);
	expect(await work(iowa)).toBeUndefined();
	await owner.query("update collect.survey set closed_at = now() where survey_id = $1", [surveyId]);
	expect(await work(iowa)).toBe("none");
	await draft("superseded");
	await draft("cancelled");
	expect(await work(iowa)).toBe("none");
	await draft("audited", '{"passed": true}');
	expect([await work(iowa), await work(wisconsin)]).toEqual(["audited", "audited"]);
	// An opened survey keeps its states; without one, whoever has it alone sees nothing of the survey.
	await owner.query("alter table collect.survey_state disable trigger user");
	await owner.query("delete from collect.survey_state where survey_id = $1 and state_fips = '55'", [surveyId]);
	await owner.query("alter table collect.survey_state enable trigger user");
	expect(await work(wisconsin)).toBeUndefined();
	expect(await count(owner, "collect.release_draft where survey_id = $1", [surveyId])).toBe(3);
	await draft("approved", '{"passed": true}');
	expect(await work(iowa)).toBeUndefined();
});

const frame = (viewer: Associate, surveyId: string, query: Record<string, unknown> = {}) =>
	asDesk(viewer, (trx) => listFrame(trx, viewer, surveyId, FrameQuery.parse(query)));
type Mailed = {
	operationId: string;
	kind?: string;
	wave?: number;
	minutesAgo: number;
	sent?: boolean;
	failure?: string;
};
const mail = (surveyId: string, { operationId, kind = "invitation", wave = 1, minutesAgo, sent, failure }: Mailed) =>
	owner.query(
		`insert into collect.mailing (survey_id, operation_id, kind, wave, queued_at, sent_at, failed_at, failure)
		values ($1, $2, $3, $4, now() - $5 * interval '1 minute', case when $6 then now() end, case when $7::text is not null then now() end, $7)`,
		[surveyId, operationId, kind, wave, minutesAgo, sent ?? false, failure ?? null],
	);

describe("the list of who is asked", () => {
	test("shows granted states only, with what came back and what was mailed", async () => {
		const { surveyId, ids } = await surveyOf([
			{ state: "19", name: "Quail Bend Orchard" },
			{ state: "19", name: "Otter Slough Fruit" },
			{ state: "55", name: "Stony Ford Farm" },
		]);
		await answerFor(owner, surveyId, ids[0]!);
		await mail(surveyId, { operationId: ids[0]!, minutesAgo: 9, sent: true });
		await mail(surveyId, { operationId: ids[0]!, kind: "reminder", minutesAgo: 5 });
		await mail(surveyId, { operationId: ids[0]!, wave: 2, minutesAgo: 2, failure: "answered" });

		const { rows, total } = await frame(iowa, surveyId);
		expect(total).toBe(2);
		expect(rows.map((row) => [row.name, row.disposition, row.submittedAt !== null])).toEqual([
			["Otter Slough Fruit", "not_reached", false],
			["Quail Bend Orchard", "complete", true],
		]);
		expect(rows[0]?.mails).toEqual([]);
		expect(rows[1]?.mails.map(({ kind, sentAt, failure }) => [kind, sentAt !== null, failure])).toEqual([
			["invitation", true, null],
			["reminder", false, null],
			["new_link", false, "answered"],
		]);
		expect(await count(owner, "collect.frame_operation where survey_id = $1", [surveyId])).toBe(3);
	});

	test("narrows by what came back and by name, to exactly these growers", async () => {
		const { surveyId, ids } = await surveyOf([
			{ state: "19", name: "A answered" },
			{ state: "19", name: "B begun" },
			{ state: "19", name: "C came back" },
			{ state: "19", name: "D mended since" },
			{ state: "19", name: "E without address", email: null, contact: "100% Wren" },
			{ state: "19", name: "F answered without address", email: "" },
		]);
		const [a, b, c, d, , f] = ids as [string, string, string, string, string, string];
		await answerFor(owner, surveyId, a);
		await answerFor(owner, surveyId, f);
		await owner.query(
			`insert into collect.response (survey_id, operation_id, state_fips, language, pledge_version)
			values ($1, $2, '19', 'en', '1')`,
			[surveyId, b],
		);
		await mail(surveyId, { operationId: c, minutesAgo: 9, failure: "returned" });
		await mail(surveyId, { operationId: d, minutesAgo: 9, failure: "returned" });
		await mail(surveyId, { operationId: d, wave: 2, minutesAgo: 2, sent: true });
		const names = async (query: Record<string, unknown>) =>
			(await frame(iowa, surveyId, query)).rows.map((row) => row.name[0]).join("");
		expect(await names({})).toBe("ABCDEF");
		expect(await names({ show: "answered" })).toBe("AF");
		expect(await names({ show: "not_answered" })).toBe("BCDE");
		expect(await names({ show: "mail_returned" })).toBe("C");
		expect(await names({ show: "no_address" })).toBe("E");
		expect(await names({ q: "ANSWERED" })).toBe("AF");
		expect(await names({ q: "100% w" })).toBe("E");
		expect(await names({ q: "%" })).toBe("E");
		expect(await names({ q: "mended", show: "answered" })).toBe("");
		expect(await names({ show: "drop table" })).toBe("ABCDEF");
	});

	test("sorts unanswered last either way, and has all on one page for paper", async () => {
		const same = Array.from({ length: 60 }, (): NewOperation => ({ state: "19", name: "Same name" }));
		const { surveyId, ids } = await surveyOf(same);
		await answerFor(owner, surveyId, ids[7]!);
		for (const direction of ["asc", "desc"]) {
			const { rows } = await frame(iowa, surveyId, { sort: "answered", direction });
			expect(rows[0]?.operationId).toBe(ids[7]);
		}
		expect((await frame(iowa, surveyId)).rows).toHaveLength(50);
		expect((await frame(iowa, surveyId, { all: "1" })).rows).toHaveLength(60);
	});
});

import type { Client } from "pg";
import { afterAll, beforeAll, beforeEach, expect, test } from "vitest";
import { endFollow, findFollow, followSeries, listFollowed, unfollowSeries } from "#app/auth/release-follows.server.ts";
import { scopedTransaction } from "#app/auth/scope.server.ts";
import type { Researcher } from "#app/auth/viewer.ts";
import { tellFollower, tellFollowers } from "#app/jobs/tell-followers.server.ts";
import { idOfToken } from "#app/mail/id-token.server.ts";
import { listCellChanges } from "#app/publish/cell-changes.server.ts";
import { loader as changesLoader } from "#app/routes/public/data-changes.tsx";
import { createTestDatabase } from "#tests/helpers/database.ts";
import { startMailServer } from "./mail-fixture.ts";
import { addRelease } from "./publish-fixture.ts";
import { addPerson, connectOwner, count, useDatabase } from "./surveys-fixture.ts";

type Made = Awaited<ReturnType<typeof addRelease>>;
let database: Awaited<ReturnType<typeof createTestDatabase>>;
let owner: Client;
let mailServer: Awaited<ReturnType<typeof startMailServer>>;
let first: Made;
let second: Made;
let seriesId: string;
let researcher: Researcher;

/** Two editions of one survey's figures: Johnson's apples lose another share, and Polk's are shown now. */
beforeAll(async () => {
	mailServer = await startMailServer();
	database = await createTestDatabase();
	useDatabase(database, { SMTP_URL: mailServer.url });
	owner = await connectOwner(database.ownerUrl);
	first = await addRelease(owner, 2040);
	second = await addRelease(owner, 2040);
	const frozen = ["release", "figure", "cell"];
	for (const table of frozen) await owner.query(`alter table release.${table} disable trigger frozen`);
	await owner.query(
		`update release.release set edition = 2, revises = $1, revision_reason = '{"en": "A sum was wrong.", "es": "Una suma."}',
			series_id = (select series_id from release.release where release_id = $1) where release_id = $2`,
		[first.releaseId, second.releaseId],
	);
	const change = (set: string, area: string, release = second) =>
		owner.query(`update release.figure set ${set} where release_id = $1 and area_key = $2`, [release.releaseId, area]);
	await change("value = 39", "19103");
	await change(
		"steadiness = 'care', value = 12, standard_error = 2, cv = 0.2, lower_bound = 8, upper_bound = 16",
		"19153",
	);
	await change("lower_bound = 36", "network");
	// Nobody's figure changes where no edition has one, and the word does.
	await owner.query("update release.cell set status = 'no_growers' where release_id = $1 and area_key = '19113'", [
		second.releaseId,
	]);
	for (const table of frozen) await owner.query(`alter table release.${table} enable trigger frozen`);
	const { rows } = await owner.query("select series_id from release.release where release_id = $1", [second.releaseId]);
	seriesId = rows[0].series_id;
	researcher = await addResearcher("jonas@lab.example", "en");
});
afterAll(async () => {
	await mailServer.stop();
	await owner.end();
	await database.drop();
});
beforeEach(async () => {
	mailServer.reset();
	await owner.query("delete from auth.release_follow");
});

async function addResearcher(email: string | null, language: "en" | "es"): Promise<Researcher> {
	const { personId, displayName } = await addPerson(owner, "Jonas Weir", []);
	await owner.query("update auth.person set email = $2, language = $3 where person_id = $1", [
		personId,
		email,
		language,
	]);
	return { role: "researcher", personId, displayName, email, language };
}

const none = <T>(work: Parameters<typeof scopedTransaction<T>>[1]) => scopedTransaction({ kind: "none" }, work);
const page = ({ number }: Made, search = "") =>
	changesLoader({
		params: { release: `${number}` },
		request: new Request(`https://survey.example/data/${number}/changes${search}`),
	} as never);

type Change = "revised" | "withdrawn";

/** Runs what a change's job queues. */
async function tellAll({ releaseId }: Made, change: Change): Promise<void> {
	await tellFollowers({ releaseId, change });
	const { rows } = await owner.query(
		"select release_follow_id from auth.change_mailing where release_id = $1 and change = $2",
		[releaseId, change],
	);
	for (const row of rows) await tellFollower({ releaseId, change, followId: row.release_follow_id });
}

test("what two editions tell differently is listed once each, as each tells it", async () => {
	const pair = { releaseId: second.releaseId, previousId: first.releaseId };
	const { changes, total } = await listCellChanges(pair, { limit: 100 });
	expect(total).toBe(3);
	expect(changes.map(({ measureKey, areaKey, before, after }) => [measureKey, areaKey, before, after])).toEqual([
		[null, "19113", { look: "withheld", value: null }, { look: "no_growers", value: null }],
		["crop_loss", "19103", { look: "number", value: 38 }, { look: "number", value: 39 }],
		["crop_loss", "19153", { look: "rough", value: null }, { look: "number", value: 12 }],
	]);
	expect((await listCellChanges(pair, { limit: 1, offset: 2 })).changes).toEqual([changes[2]]);
	const backwards = { releaseId: first.releaseId, previousId: second.releaseId };
	expect((await listCellChanges(backwards, { limit: 100 })).changes.map(({ before }) => before)).toEqual(
		changes.map(({ after }) => after),
	);
});

test("everybody finds them on a page, and a first edition has none", async () => {
	expect(await page(second)).toMatchObject({ total: 3, previous: { number: first.number } });
	expect((await page(second, "?page=nonsense")).changes).toHaveLength(3);
	expect((await page(second, "?page=9")).changes).toEqual([]);
	await expect(page(first)).rejects.toMatchObject({ init: { status: 404 } });
});

test("a follower gets one mail with what changed, in the follower's language, and a second run sends none", async () => {
	const spanish = await addResearcher("eva@lab.example", "es");
	await followSeries(researcher, seriesId);
	await followSeries(researcher, seriesId);
	await followSeries(spanish, seriesId);
	expect(await count(owner, "auth.release_follow")).toBe(2);
	await tellAll(second, "revised");
	await tellAll(second, "revised");
	expect(mailServer.received).toHaveLength(2);
	const mailTo = (address: string) => mailServer.received.find(({ to }) => to && "text" in to && to.text === address)!;
	const english = mailTo("jonas@lab.example");
	expect(english.text).toContain("Why: A sum was wrong.");
	expect(english.text).toContain("3 figures are told differently:");
	expect(english.text).toContain("Johnson County, Iowa, Apple, After harvest 2040: before 38%, now 39%");
	expect(english.text).toContain("before Too rough to publish, now 12%");
	expect(english.text).toContain("before Withheld, now No growers");
	expect(english.text).toContain(`/data/${second.number}/changes`);
	expect(mailTo("eva@lab.example").text).toContain("Motivo: Una suma.");
});

test("one press in the mail's own list header ends the follow, and whoever stopped gets nothing", async () => {
	await followSeries(researcher, seriesId);
	await tellAll(second, "revised");
	const header = mailServer.received[0]!.headers.get("list") as { unsubscribe: { url: string } };
	const followId = idOfToken("unfollow", header.unsubscribe.url.split("/unfollow/")[1]!)!;
	expect(await none((trx) => findFollow(trx, followId))).toMatchObject({ language: "en" });
	await none((trx) => endFollow(trx, followId));
	await none((trx) => endFollow(trx, followId));
	expect(await listFollowed(researcher)).toEqual([]);

	await followSeries(researcher, seriesId);
	await tellFollowers({ releaseId: second.releaseId, change: "revised" });
	await unfollowSeries(researcher, seriesId);
	expect(await count(owner, "auth.change_mailing")).toBe(0);
	await tellAll(second, "revised");
	expect(mailServer.received).toHaveLength(1);
});

test("a first edition is news to nobody, nor is anything to who has no address", async () => {
	await followSeries(researcher, seriesId);
	await tellAll(first, "revised");
	await unfollowSeries(researcher, seriesId);
	await followSeries(await addResearcher(null, "en"), seriesId);
	await tellAll(second, "revised");
	expect(mailServer.received).toEqual([]);
});

test("what may have arrived is not sent again, and a mail server that is away is tried again", async () => {
	await followSeries(researcher, seriesId);
	mailServer.trouble = { at: "from", code: 451 };
	await expect(tellAll(second, "revised")).rejects.toThrow();
	mailServer.trouble = "hang up";
	await tellAll(second, "revised");
	mailServer.trouble = null;
	await tellAll(second, "revised");
	expect(mailServer.received).toHaveLength(1);
	expect(await count(owner, "auth.change_mailing where failed_as = 'uncertain'")).toBe(1);
});

test("a withdrawal is mailed with its reason and no figure, and takes the list of changes away", async () => {
	await followSeries(researcher, seriesId);
	await owner.query(
		`insert into release.withdrawal (release_id, reason) values ($1, '{"en": "A county was wrong.", "es": "Mal."}')`,
		[second.releaseId],
	);
	await tellAll(second, "revised");
	expect(mailServer.received).toEqual([]);
	await tellAll(second, "withdrawn");
	expect(mailServer.received).toHaveLength(1);
	expect(mailServer.received[0]!.text).toContain("Why: A county was wrong.");
	expect(mailServer.received[0]!.text).not.toMatch(/\d%/);
	expect(await page(second)).toMatchObject({ total: null, changes: [] });
});

import { createHash } from "node:crypto";
import type { Client } from "pg";
import { createSession, type LoaderFunctionArgs, RouterContextProvider } from "react-router";
import { afterAll, beforeAll, expect, test } from "vitest";
import { sessionContext, type VisitorSession } from "#app/auth/session.server.ts";
import type { Visitor } from "#app/auth/visitor.server.ts";
import { visitorContext } from "#app/auth/visitor.server.ts";
import { i18nextMiddleware } from "#app/i18n/middleware.server.ts";
import { action as keysAction, loader as keysLoader } from "#app/routes/dataroom/keys.tsx";
import { loader as dataroomLoader } from "#app/routes/dataroom/home.tsx";
import { action as followAction } from "#app/routes/dataroom/follow.ts";
import { loader as fileLoader } from "#app/routes/dataroom/file.ts";
import { loader as citeLoader } from "#app/routes/public/cite.ts";
import { loader as releaseLoader } from "#app/routes/public/data-release.tsx";
import { loader as catalogueLoader } from "#app/routes/public/data.tsx";
import { loader as reportLoader } from "#app/routes/public/report.tsx";
import { createTestDatabase, type TestDatabase } from "#tests/helpers/database.ts";
import { dcatRules, faultsOf, schemaOrgRules, unknownPrefixes } from "./linked-data-rules.ts";
import { addRelease } from "./publish-fixture.ts";
import { addReleaseWithFiles } from "./released-files-fixture.ts";
import { addPerson, connectOwner, useDatabase } from "./surveys-fixture.ts";

let database: TestDatabase;
let owner: Client;
let made: { releaseId: string; number: number };
let personId: string;

beforeAll(async () => {
	database = await createTestDatabase();
	useDatabase(database);
	owner = await connectOwner(database.ownerUrl);
	made = await addReleaseWithFiles(owner);
	({ personId } = await addPerson(owner, "Jonas Weir", []));
});
afterAll(async () => {
	await owner.end();
	await database.drop();
});

type Asked = {
	params?: Record<string, string>;
	search?: string;
	form?: Record<string, string>;
	researcher?: boolean;
	language?: string;
};

/** Runs a loader or an action as the server does: with the words of a language, and with whoever asks. */
async function run<T>(work: (args: never) => Promise<T>, asked: Asked = {}): Promise<T> {
	const { params = {}, search = "", form, researcher, language = "en" } = asked;
	const body = form && new URLSearchParams(form);
	const request = new Request(`https://survey.example/page${search}`, {
		method: form ? "POST" : "GET",
		body,
		headers: { "accept-language": language },
	});
	const context = new RouterContextProvider();
	context.set(sessionContext, createSession() as unknown as VisitorSession);
	if (researcher !== undefined) {
		const person = { personId, displayName: "Jonas Weir", email: "jonas@lab.example", language: null };
		const grants = { coordinator: false, researcher, stateFips: [], operationIds: [] };
		context.set(visitorContext, { person, grants, link: null } satisfies Visitor);
	}
	const args = { request, context, params } as unknown as LoaderFunctionArgs;
	let result: T | undefined;
	await i18nextMiddleware(args as never, async () => {
		result = await work(args as never);
		return new Response();
	});
	return result as T;
}
const ofRelease = () => ({ release: `${made.number}` });

const page = (number: number) => run(releaseLoader, { params: { release: `${number}` } });
const found = async (search: string) =>
	(await run(catalogueLoader, { search })).data.rows.map(({ release }) => release.number);
const take = (file: string, researcher?: boolean) => run(fileLoader, { params: { ...ofRelease(), file }, researcher });
const reportSent = async () => JSON.stringify(await run(reportLoader, { params: { slug: "early-plums" } }));
const taken = async () => (await owner.query("select file_key from log.download")).rows;

test("a release's page tells its files with size and checksum, to people and to machines", async () => {
	const { files, described, preview } = await run(releaseLoader, { params: ofRelease() });
	const { rows } = await owner.query<{ name: string; content: Buffer }>(
		"select name, content from release.file where release_id = $1 order by position",
		[made.releaseId],
	);
	const sums = rows.map(({ name, content }) => ({
		name,
		byteCount: content.length,
		sha256: createHash("sha256").update(content).digest("hex"),
	}));
	expect(files).toEqual(sums.map((sum) => expect.objectContaining(sum)));
	expect(preview.length).toBeGreaterThan(0);

	const [dataset] = described as [Record<string, unknown>, Record<string, unknown>];
	expect(dataset).toMatchObject({ temporalCoverage: "2031" });
	const distribution = dataset.distribution as { contentUrl: string; sha256: string }[];
	expect(distribution.map(({ sha256 }) => sha256)).toEqual(sums.map(({ sha256 }) => sha256));
	expect(distribution[1]!.contentUrl).toBe(`https://survey.example/api/v1/releases/${made.number}/files/cells.csv`);
});

test("what a release's page tells machines keeps the rules of schema.org and of DCAT-US 3, in both languages", async () => {
	for (const language of ["en", "es"]) {
		const { described } = await run(releaseLoader, { params: ofRelease(), language });
		const [dataset, dcat] = described as [Record<string, unknown>, Record<string, unknown>];
		expect(faultsOf(dataset, schemaOrgRules)).toEqual([]);
		expect(faultsOf(dcat, dcatRules)).toEqual([]);
		expect(unknownPrefixes(dcat)).toEqual([]);
		expect(dataset.inLanguage).toBe(language);
		// A checker that finds nothing wrong with anything would pass too.
		for (const [record, rules] of [[dataset, schemaOrgRules] as const, [dcat, dcatRules] as const])
			for (const name of Object.keys(rules).filter((one) => rules[one]!.must))
				expect(faultsOf({ ...record, [name]: 7 }, rules)).toEqual([`${name} is 7`]);
	}
});

test("a revision's page counts what changed, and a withdrawn one's tells machines nothing", async () => {
	const first = await addRelease(owner, 2040);
	const second = await addRelease(owner, 2041);
	await owner.query("alter table release.release disable trigger frozen");
	await owner.query("alter table release.figure disable trigger frozen");
	await owner.query(
		`update release.release set edition = 2, revises = $1, revision_reason = '{"en": "A sum was wrong.", "es": "Una suma."}',
			series_id = (select series_id from release.release where release_id = $1) where release_id = $2`,
		[first.releaseId, second.releaseId],
	);
	await owner.query("update release.figure set value = value + 1 where release_id = $1 and area_key = '19103'", [
		second.releaseId,
	]);
	await owner.query("alter table release.release enable trigger frozen");
	await owner.query("alter table release.figure enable trigger frozen");
	expect((await page(second.number)).changes).toEqual({ same: 2, changed: 1, shown: 0, hidden: 0 });
	expect((await page(first.number)).changes).toBeNull();

	await owner.query(
		`insert into release.withdrawal (release_id, reason) values ($1, '{"en": "Wrong.", "es": "Mal."}')`,
		[first.releaseId],
	);
	const withdrawn = await page(first.number);
	expect([withdrawn.described, withdrawn.preview, withdrawn.files]).toEqual([[], [], []]);
	expect((await page(second.number)).changes).toBeNull();
});

test("a researcher follows a release from its page and ends that in the data room, and others are told what is missing", async () => {
	const { release } = await run(releaseLoader, { params: ofRelease() });
	const following = async (researcher?: boolean) =>
		(await run(releaseLoader, { params: ofRelease(), researcher })).following;
	const follow = (intent: string, researcher?: boolean, seriesId = release.seriesId) =>
		run(followAction, { form: { seriesId, intent, release: `${made.number}` }, researcher });
	expect([await following(), await following(false), await following(true)]).toEqual([
		"signed_out",
		"no_researcher",
		"no",
	]);
	await expect(follow("follow")).rejects.toMatchObject({ init: { status: 401 } });
	await expect(follow("follow", false)).rejects.toMatchObject({ init: { status: 403 } });
	await expect(follow("follow", true, "0193b2d2-7a57-4e7c-9a39-5b1f6f0a7a11")).rejects.toMatchObject({
		init: { status: 404 },
	});
	await expect(follow("adopt", true)).rejects.toMatchObject({ init: { status: 404 } });

	expect((await follow("follow", true)).headers.get("location")).toBe(`/data/${made.number}#follow`);
	expect(await following(true)).toBe("yes");
	const followed = async () =>
		(await run(dataroomLoader, { researcher: true })).follows.map(({ seriesId }) => seriesId);
	expect(await followed()).toEqual([release.seriesId]);
	await run(followAction, { form: { seriesId: release.seriesId, intent: "unfollow" }, researcher: true });
	expect(await followed()).toEqual([]);
	expect(await following(true)).toBe("no");
});

test("the catalogue finds releases by word, season, state and fate", async () => {
	expect(await found("")).toContain(made.number);
	const long = "plum ".repeat(600).trim();
	const { data, init } = await run(catalogueLoader, { search: `?q=${long}&season=2031` });
	expect(init).toEqual({ status: 400 });
	expect(data).toMatchObject({ query: { q: long, season: 2031 }, problem: { field: "q", code: "search_too_long" } });
	expect(data.rows.map(({ release }) => release.number)).toEqual([made.number]);
	expect(await found("?q=harvest+2031&season=2031&state=19&what=current")).toEqual([made.number]);
	expect(await found("?season=1999")).toEqual([]);
	expect(await found("?season=soon&what=lost&state=Iowa")).toEqual(await found(""));
});

test("a citation comes as BibTeX and as RIS, and in no other shape", async () => {
	const cite = (citation: string, release = `${made.number}`) => run(citeLoader, { params: { release, citation } });
	expect(await (await cite("citation.bib")).text()).toContain(`url = {https://survey.example/data/${made.number}}`);
	expect((await cite("citation.ris")).headers.get("content-type")).toContain("research-info-systems");
	expect((await cite("citation.doc")).status).toBe(404);
	expect((await cite("citation.bib", "999")).status).toBe(404);
});

test("in the data room a file is for approved researchers, and each taking is recorded", async () => {
	await expect(take("cells.csv")).rejects.toMatchObject({ init: { status: 401 } });
	await expect(take("cells.csv", false)).rejects.toMatchObject({ init: { status: 403 } });
	await expect(take("other.csv", true)).rejects.toMatchObject({ init: { status: 404 } });
	expect(await taken()).toEqual([]);
	const response = await take("cells.csv", true);
	expect(response.headers.get("cache-control")).toMatch(/^private/);
	expect(response.headers.get("content-disposition")).toContain(`tallygrove-release-${made.number}-cells.csv`);
	expect(await taken()).toEqual([{ file_key: "cells.csv" }]);
});

test("a key is told once, when it is made, and what was typed is not lost when it cannot be", async () => {
	const send = (form: Record<string, string>, researcher = true) =>
		run(keysAction, { form, researcher }) as Promise<{
			data: { key: string | null; problems: unknown[]; values: object };
		}>;
	const whole = { label: "Notebook", scopes: "figures", days: "30" };
	await expect(send(whole, false)).rejects.toMatchObject({ init: { status: 403 } });
	const wrong = await send({ ...whole, label: "", days: "9000" });
	expect(wrong.data).toMatchObject({
		key: null,
		values: { scopes: "figures" },
		problems: [
			{ field: "label", code: "empty" },
			{ field: "days", code: "wrong" },
		],
	});
	const nothing = await send({ label: "Notebook", days: "30" });
	expect(nothing.data.problems).toEqual([{ field: "scopes", code: "choose_some" }]);
	const { data: told } = await send(whole);
	expect(told.key).toMatch(/^tally_[\w-]{43}$/);
	const listed = await run(keysLoader, { researcher: true });
	expect(listed.keys).toMatchObject([{ label: "Notebook", scopes: ["figures"], keyStart: told.key!.slice(0, 10) }]);
	expect(JSON.stringify(listed)).not.toContain(told.key);
	expect((await run(keysLoader, { researcher: false })).keys).toEqual([]);
});

test("of a report whose figures were withdrawn no word leaves the server", async () => {
	const { releaseId } = await addRelease(owner, 2037);
	const words = { en: "Frost took the early plums.", es: "La helada se llevó las ciruelas." };
	await owner.query(
		`insert into publish.report (slug, release_id, state, content, created_by, author_name, published_by, published_at)
		values ('early-plums', $1, 'published', $2, $3, 'Jonas Weir', gen_random_uuid(), now())`,
		[releaseId, JSON.stringify({ title: words, summary: words, blocks: [] }), personId],
	);
	expect(await reportSent()).toContain(words.en);
	await owner.query(
		`insert into release.withdrawal (release_id, reason) values ($1, '{"en": "Wrong.", "es": "Mal."}')`,
		[releaseId],
	);
	expect(await reportSent()).toContain("Wrong.");
	expect(await reportSent()).not.toContain("plums");
});

import { createHash } from "node:crypto";
import { Validator } from "@seriousme/openapi-schema-validator";
import Ajv2020 from "ajv/dist/2020.js";
import addFormats from "ajv-formats";
import { parse } from "csv-parse/sync";
import type { Client } from "pg";
import { type LoaderFunctionArgs, RouterContextProvider } from "react-router";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import { makeApiKey, revokeApiKey } from "#app/auth/api-keys.server.ts";
import { apiLimits } from "#app/auth/api-limits.server.ts";
import type { Researcher } from "#app/auth/viewer.ts";
import { i18nextMiddleware } from "#app/i18n/middleware.server.ts";
import { makeReleaseFiles } from "#app/jobs/make-release-files.server.ts";
import { chosenType } from "#app/publish/api/accept.ts";
import { ProblemDetails } from "#app/publish/api/items.ts";
import { problemStatus } from "#app/publish/api/problem.ts";
import { loader as areas } from "#app/routes/api/v1/areas.ts";
import { loader as cells } from "#app/routes/api/v1/cells.ts";
import { loader as crops } from "#app/routes/api/v1/crops.ts";
import { loader as entry } from "#app/routes/api/v1/entry.ts";
import { loader as file } from "#app/routes/api/v1/file.ts";
import { loader as files } from "#app/routes/api/v1/files.ts";
import { loader as geometry } from "#app/routes/api/v1/geometry.ts";
import { loader as measures } from "#app/routes/api/v1/measures.ts";
import { loader as openapi } from "#app/routes/api/v1/openapi.ts";
import { loader as release } from "#app/routes/api/v1/release.ts";
import { loader as releases } from "#app/routes/api/v1/releases.ts";
import { loader as unknown } from "#app/routes/api/v1/unknown.ts";
import { createTestDatabase, type TestDatabase } from "#tests/helpers/database.ts";
import { secret } from "./publish-fixture.ts";
import { addOddRelease, addReleaseWithFiles } from "./released-files-fixture.ts";
import { addPerson, connectOwner, useDatabase } from "./surveys-fixture.ts";

const takesCsv = { headers: { accept: "text/csv" } };
type Json = Record<string, unknown>;
type Row = Record<string, string | number | null>;
type Page = { data: Row[]; next: string | null };
type Problem = {
	type: string;
	title: string;
	status: number;
	detail: string;
	errors?: { parameter: string; detail: string; allowed?: string[] }[];
};

/** Each address with its route, as app/routes.ts joins them. */
const routes: [RegExp, (args: never) => Promise<Response>][] = [
	[/^$/, entry],
	[/^\/openapi\.json$/, openapi],
	[/^\/releases$/, releases],
	[/^\/releases\/(?<release>[^/]+)$/, release],
	[/^\/releases\/(?<release>[^/]+)\/measures$/, measures],
	[/^\/releases\/(?<release>[^/]+)\/crops$/, crops],
	[/^\/releases\/(?<release>[^/]+)\/areas$/, areas],
	[/^\/releases\/(?<release>[^/]+)\/cells$/, cells],
	[/^\/releases\/(?<release>[^/]+)\/geometry$/, geometry],
	[/^\/releases\/(?<release>[^/]+)\/files$/, files],
	[/^\/releases\/(?<release>[^/]+)\/files\/(?<file>[^/]+)$/, file],
	[/^/, unknown],
];

let database: TestDatabase;
let owner: Client;
let made: { releaseId: string; number: number };
let contract: {
	paths: Record<string, { get: { responses: Record<string, { content?: Record<string, { schema: object }> }> } }>;
};
const ajv = addFormats(new Ajv2020({ strict: false }));

beforeAll(async () => {
	database = await createTestDatabase();
	useDatabase(database);
	owner = await connectOwner(database.ownerUrl);
	made = await addReleaseWithFiles(owner);
	contract = (await (await get("/openapi.json")).json()) as typeof contract;
	ajv.addSchema(contract as never, "contract");
});
afterAll(async () => {
	await owner.end();
	await database.drop();
});

type Options = { headers?: Record<string, string>; method?: string };
let visitor = 0;

/** Asks as a program does, each time from another address, and holds what is answered to the OpenAPI document. */
async function get(at: string, { headers = {}, method = "GET" }: Options = {}): Promise<Response> {
	const url = new URL(at.startsWith("http") ? at : `https://survey.example/api/v1${at}`);
	const path = url.pathname.slice("/api/v1".length);
	const [pattern, loader] = routes.find(([one]) => one.test(path))!;
	const params = { ...pattern.exec(path)!.groups };
	const request = new Request(url, { method, headers: { "x-forwarded-for": `10.0.0.${(visitor += 1)}`, ...headers } });
	const context = new RouterContextProvider();
	const args = { request, context, params } as unknown as LoaderFunctionArgs;
	const response = (await i18nextMiddleware(args as never, () => loader(args as never) as never)) as Response;
	if (contract) await meetsContract(path, method, response.clone());
	return response;
}

const ids = [/\/releases\/[^/]+/, "/releases/{release}"] as const;
const templateOf = (path: string) => path.replace(ids[0], ids[1]).replace(/\/files\/.+$/, "/files/{file}") || "/";

async function meetsContract(path: string, method: string, response: Response): Promise<void> {
	if (method !== "GET" || response.status === 304) return;
	const type = response.headers.get("content-type")?.split(";")[0] ?? "";
	if (response.status >= 400) {
		expect(type).toBe("application/problem+json");
		const body = (await response.json()) as Problem;
		expect(body.status).toBe(response.status);
		expect(ajv.validate({ $ref: "contract#/components/schemas/ProblemDetails" }, body), ajv.errorsText()).toBe(true);
		return;
	}
	const told = contract.paths[templateOf(path)]!.get.responses[response.status];
	expect(told, `${path} ${response.status}`).toBeDefined();
	if (!type.endsWith("json") || path.includes("/files/")) return;
	const place = ["paths", templateOf(path), "get", "responses", `${response.status}`, "content", type, "schema"]
		.map((part) => encodeURIComponent(part.replaceAll("~", "~0").replaceAll("/", "~1")))
		.join("/");
	expect(ajv.validate({ $ref: `contract#/${place}` }, await response.json()), `${path} ${ajv.errorsText()}`).toBe(true);
}

const of = (rest: string) => `/releases/${made.number}${rest}`;
const page = async (at: string) => (await (await get(at)).json()) as Page;
const problem = async (at: string, options?: Options) => {
	const response = await get(at, options);
	const body = (await response.json()) as Problem;
	expect(body.status).toBe(response.status);
	return body;
};

describe("the OpenAPI document", () => {
	test("is valid, also to an outside validator, which rejects a broken one", async () => {
		const validator = new Validator();
		expect(await validator.validate(structuredClone(contract) as never)).toMatchObject({ valid: true });
		expect(await validator.validate({ ...contract, info: undefined } as never)).toMatchObject({ valid: false });
	});

	test("tells every refusal that an address can answer with by its code, also where several have one status", () => {
		type Told = { description: string; content: Record<string, { examples: Record<string, { value: Problem }> }> };
		const { responses } = contract.paths["/releases/{release}/files/{file}"]!.get as unknown as {
			responses: Record<string, Told>;
		};
		const codes = Object.entries(responses).flatMap(([status, { content }]) =>
			Object.entries(content?.["application/problem+json"]?.examples ?? {}).map(([code, { value }]) => {
				expect(value).toMatchObject({ status: Number(status), type: `https://survey.example/api#${code}` });
				return code;
			}),
		);
		// All but the one for an address that does not exist.
		expect(new Set(codes)).toEqual(new Set(Object.keys(problemStatus).filter((code) => code !== "not_found")));
		expect(responses[401]!.description).toBe("This key opens nothing / This key has expired");
	});

	test("names every address that there is, and each answers", async () => {
		for (const path of Object.keys(contract.paths)) {
			const at = path === "/" ? "" : path.replace("{release}", `${made.number}`).replace("{file}", "cells.csv");
			expect((await get(at)).status, path).toBe(200);
		}
	});

	test("tells the parameters of the figures with their limits, from the schema that checks them", () => {
		const { parameters } = contract.paths["/releases/{release}/cells"]!.get as unknown as { parameters: Json[] };
		const limit = parameters.find(({ name }) => name === "limit");
		expect(limit).toMatchObject({ in: "query", required: false, schema: { minimum: 1, maximum: 10_000 } });
	});
});

describe("the figures", () => {
	test("are those of the file, cell by cell, as JSON and as CSV", async () => {
		const whole = await page(of("/cells"));
		const csvFile = await (await get(of("/files/cells.csv"))).text();
		const csv = await get(of("/cells"), { headers: { accept: "text/csv" } });
		expect(csv.headers.get("content-type")).toBe("text/csv; charset=utf-8; header=present");
		expect(await csv.text()).toBe(csvFile);
		const lines = parse(csvFile, { columns: true }) as Record<string, string>[];
		expect(whole.data.map((row) => Object.values(row).map((value) => String(value ?? "")))).toEqual(
			lines.map((line) => Object.values(line).map((value) => value.replace(/^'=/, "="))),
		);
		expect(whole.next).toBeNull();
	});

	test("come in pages that fit together, with the next one's address", async () => {
		const { data: all } = await page(of("/cells"));
		const found: Row[] = [];
		let next: string | null = `https://survey.example/api/v1${of("/cells?limit=4")}`;
		let pages = 0;
		while (next) {
			const response = await get(next);
			const { data, next: following } = (await response.json()) as Page;
			expect(response.headers.get("link")).toBe(following && `<${following}>; rel="next"`);
			found.push(...data);
			next = following;
			pages += 1;
		}
		expect(pages).toBe(Math.ceil(all.length / 4));
		expect(found).toEqual(all);
	});

	// JSON is cut out of what a process keeps of a release, CSV is asked for each time.
	test.each(["", "&crop=plum", "&measure=first_bloom.day,yield_per_tree&crop=apple", "&area=19103"])(
		"come by one cursor in both formats, so that a script may change between them: %s",
		async (filters) => {
			const codesOf = (row: Row) => [row.measure, row.crop, row.area_code, String(row.value ?? "")];
			const whole = parse(await (await get(of(`/cells?limit=10000${filters}`), takesCsv)).text(), { columns: true });
			const found: Row[] = [];
			let next: string | null = `https://survey.example/api/v1${of(`/cells?limit=3${filters}`)}`;
			for (let pages = 0; next; pages++) {
				const response = await get(next, pages % 2 === 0 ? {} : takesCsv);
				const rows =
					pages % 2 === 0 ? ((await response.json()) as Page).data : parse(await response.text(), { columns: true });
				found.push(...(rows as Row[]));
				next = /<(.*)>/.exec(response.headers.get("link") ?? "")?.[1] ?? null;
			}
			expect(found.length).toBeGreaterThan(3);
			expect(found.map(codesOf)).toEqual((whole as Row[]).map(codesOf));
		},
	);

	test.each<[string, (row: Row) => boolean]>([
		["measure=crop_loss", (row) => row.measure === "crop_loss"],
		["measure=crop_loss,first_bloom.day&crop=plum", (row) => row.measure !== "yield_per_tree" && row.crop === "plum"],
		["area=19103&area=01001", (row) => row.area_code === "19103" || row.area_code === "01001"],
		["kind=county&state=19", (row) => row.area_kind === "county" && row.state_code === "19"],
		["status=Q", (row) => row.status === "Q"],
		["status=A", (row) => row.status === "A"],
		["status=M,N,O", (row) => ["M", "N", "O"].includes(String(row.status))],
	])("are chosen by %s", async (query, wanted) => {
		const { data: all } = await page(of("/cells"));
		const { data: chosen } = await page(of(`/cells?${query}`));
		expect(chosen.length).toBeGreaterThan(0);
		expect(chosen).toEqual(all.filter(wanted));
	});
});

test("measures, crops and areas are those of the figures, and the outlines those of the areas", async () => {
	const { data: all } = await page(of("/cells"));
	const codes = async (at: string, key: string) => (await page(of(at))).data.map((row) => row[key]);
	const used = (key: string) => [...new Set(all.map((row) => row[key]))];
	expect((await codes("/measures", "measure")).toSorted()).toEqual(used("measure").toSorted());
	expect((await codes("/crops", "crop")).toSorted()).toEqual(used("crop").toSorted());
	expect(await codes("/areas", "area_code")).toEqual(expect.arrayContaining(used("area_code")));
	const { features } = (await (await get(of("/geometry?kind=county&state=19"))).json()) as {
		features: { id: string }[];
	};
	expect(features.map(({ id }) => id).toSorted()).toEqual(
		(await page(of("/areas?kind=county&state=19"))).data.map((row) => row.area_code),
	);
});

describe("a copy", () => {
	test("is not sent again to who has it, and is another for other questions and types", async () => {
		const first = await get(of("/cells"));
		const etag = first.headers.get("etag")!;
		expect(etag).toMatch(/^"[\w-]+"$/);
		expect(first.headers.get("cache-control")).toMatch(/^public, max-age=60/);
		const again = await get(of("/cells"), { headers: { "if-none-match": etag } });
		expect([again.status, await again.text(), again.headers.get("etag")]).toEqual([304, "", etag]);
		for (const [at, headers] of [
			[of("/cells?crop=plum"), {}],
			[of("/cells"), { accept: "text/csv" }],
		] as const) {
			expect((await get(at, { headers: { ...headers, "if-none-match": etag } })).status).toBe(200);
		}
	});

	test("has the same headers for HEAD and no body, and other sites may read it", async () => {
		const [whole, head] = [await get(of("/cells")), await get(of("/cells"), { method: "HEAD" })];
		expect(await head.text()).toBe("");
		for (const name of ["etag", "content-type", "cache-control"])
			expect(head.headers.get(name)).toBe(whole.headers.get(name));
		expect(whole.headers.get("access-control-allow-origin")).toBe("*");
		const asked = await get(of("/cells"), { method: "OPTIONS" });
		expect([asked.status, asked.headers.get("access-control-allow-headers")]).toEqual([
			204,
			expect.stringContaining("authorization"),
		]);
	});
});

describe("a request that is wrong gets told which parameter, and what would be right:", () => {
	const many = Array.from({ length: 10_000 }, (_, at) => `a${at}`).join(",");
	test.each<[string, string, number, string, RegExp | string[]]>([
		["an unknown measure", "/cells?measure=nope", 400, "measure", ["crop_loss", "yield_per_tree", "first_bloom.day"]],
		["a malformed measure", "/cells?measure=Crop%20Loss!", 400, "measure", /An example of one: crop_loss/],
		["an unknown crop", "/cells?crop=apple,mango", 400, "crop", ["apple", "plum"]],
		["an unknown area", "/cells?area=99999,19103", 400, "area", /99999.*\/releases\/\d+\/areas/],
		["a state in words", "/cells?state=Iowa", 400, "state", /An example of one: 19/],
		["an unknown kind", "/cells?kind=village", 400, "kind", ["county", "district", "state", "region"]],
		["an unknown status", "/cells?status=W", 400, "status", ["A", "Q", "M", "N", "O"]],
		["ten thousand filters", `/cells?area=${many}`, 400, "area", /at most 100 values/],
		["an absurd size", "/cells?limit=99999999999", 400, "limit", /from 1 to 10000/],
		["a size in another way of writing", "/cells?limit=1e2", 400, "limit", /from 1 to 10000/],
		["a size with a space", "/cells?limit=%2010", 400, "limit", /from 1 to 10000/],
		["no size", "/cells?limit=0", 400, "limit", /from 1 to 10000/],
		["a size in words", "/cells?limit=all", 400, "limit", /from 1 to 10000/],
		["two sizes", "/cells?limit=1&limit=2", 400, "limit", /once/],
		["a parameter that is not there", "/cells?mesure=crop_loss", 400, "mesure", /no parameter mesure/],
		["a name that objects have", "/cells?__proto__=1&constructor=2", 400, "__proto__", /no parameter/],
		["a cursor that was made up", "/cells?cursor=abc", 400, "cursor", /as it stands/],
		["a kind for outlines twice", "/geometry?kind=county&kind=state", 400, "kind", /once/],
	])("%s", async (_what, at, status, parameter, right) => {
		const told = await problem(of(at));
		expect(told.status).toBe(status);
		expect(told.type).toBe("https://survey.example/api#bad_parameter");
		const wrong = told.errors!.find((one) => one.parameter === parameter)!;
		if (Array.isArray(right)) expect(wrong.allowed).toEqual(right);
		else expect(wrong.detail).toMatch(right);
	});

	test("a cursor that was changed, or that belongs to another question", async () => {
		const { next } = await page(of("/cells?limit=2"));
		const cursor = new URL(next!).searchParams.get("cursor")!;
		const [text, mac] = cursor.split(".") as [string, string];
		const other = Buffer.from(JSON.stringify([0, "apple", "county", "0"])).toString("base64url");
		for (const query of [`cursor=${other}.${mac}`, `cursor=${text}.${"A".repeat(16)}`, `crop=plum&cursor=${cursor}`]) {
			expect(await problem(of(`/cells?${query}`))).toMatchObject({ status: 400, errors: [{ parameter: "cursor" }] });
		}
		expect((await get(of(`/cells?limit=3&cursor=${cursor}`))).status).toBe(200);
	});

	test("a part of a file that the file does not have, which nobody on the way may pack", async () => {
		const told = await get(of("/files/cells.csv"), { headers: { range: "bytes=99999999-" } });
		const { bytes } = (await page(of("/files"))).data.find(({ name }) => name === "cells.csv")!;
		expect([told.status, told.headers.get("content-range")]).toEqual([416, `bytes */${bytes}`]);
		expect(await told.json()).toMatchObject({
			errors: [{ parameter: "range", detail: expect.stringContaining(`${Number(bytes) - 1}`) as string }],
		});
		const part = await get(of("/files/cells.csv"), { headers: { range: "bytes=0-4" } });
		expect([part.status, await part.text()]).toEqual([206, "relea"]);
		expect(part.headers.get("cache-control")).toContain("no-transform");
	});

	test("a release that is not there, is no number, or an address that is not there", async () => {
		expect(await problem("/releases/9999/cells")).toMatchObject({ status: 404 });
		expect(await problem("/releases/one/cells")).toMatchObject({ status: 400, errors: [{ parameter: "release" }] });
		expect(await problem(of("/figures"))).toMatchObject({ status: 404, title: "There is nothing at this address" });
		expect(await problem(of("/files/other.csv"))).toMatchObject({ status: 404 });
		expect(await problem(of("/files/..%2Fcells.csv"))).toMatchObject({ status: 400, errors: [{ parameter: "file" }] });
	});

	test("a format that there is not, and a method that writes", async () => {
		const xml = await problem(of("/cells"), { headers: { accept: "application/xml" } });
		expect(xml).toMatchObject({ status: 406, errors: [{ allowed: ["application/json", "text/csv"] }] });
		const post = await get(of("/cells"), { method: "POST" });
		expect([post.status, post.headers.get("allow")]).toEqual([405, "GET, HEAD, OPTIONS"]);
	});

	test("in the reader's own language", async () => {
		const told = await problem(of("/cells?limit=0"), { headers: { "accept-language": "es" } });
		expect(told.title).toBe("Un parámetro no es correcto");
		expect(told.errors![0]!.detail).toBe("limit debe ser un número entero de 1 a 10000.");
	});
});

// RFC 9110, section 12.5.1: the most exact range decides, a weight of 0 says no, and nothing said means anything.
test.each<[string | null, string | undefined]>([
	[null, "application/json"],
	["*/*", "application/json"],
	["text/*", "text/csv"],
	["text/csv;q=0.4, application/json;q=0.8", "application/json"],
	["application/json;q=0, */*;q=0.1", "text/csv"],
	["text/html, application/xhtml+xml, */*;q=0.8", "application/json"],
	["image/png", undefined],
	["text/csv;q=nonsense", undefined],
])("to who accepts %s goes %s", (accept, type) => {
	expect(chosenType(accept, ["application/json", "text/csv"])).toBe(type);
});

const bearer = (key: string) => ({ headers: { authorization: `Bearer ${key}` } });

async function addResearcher(name: string): Promise<Researcher> {
	const person = await addPerson(owner, name, []);
	await owner.query("insert into auth.role_grant (person_id, role, granted_by) values ($1, 'researcher', $2)", [
		person.personId,
		(await addPerson(owner, "Ada Thornbury", [])).personId,
	]);
	return { ...person, role: "researcher" } as unknown as Researcher;
}
async function keyFor(researcher: Researcher, scopes: ("figures" | "files")[] = ["figures", "files"]) {
	const outcome = await makeApiKey(researcher, { label: "Notebook", scopes, days: "30" });
	if (outcome === "too_many_keys") throw new Error(outcome);
	return outcome.key;
}

const hashed = (key: string) => createHash("sha256").update(key).digest("base64url");

describe("keys", () => {
	test("are kept as a hash, raise the limit, and are noted when used", async () => {
		const key = await keyFor(await addResearcher("Jonas Weir"));
		const { rows } = await owner.query<{ row: Json }>("select to_jsonb(k) as row from auth.api_key k");
		expect(JSON.stringify(rows)).not.toContain(key);
		expect(rows.at(-1)!.row).toMatchObject({
			key_hash: hashed(key),
			last_used_at: null,
		});
		const used = await get(of("/cells"), bearer(key));
		expect(used.status).toBe(200);
		expect(used.headers.get("ratelimit-policy")).toBe(`"key";q=${apiLimits.key};w=60`);
		const noted = await owner.query("select last_used_at from auth.api_key where last_used_at is not null");
		expect(noted.rowCount).toBe(1);
	});

	test("open nothing once expired, revoked, made up, or when their owner has no access any more", async () => {
		const researcher = await addResearcher("Mina Holt");
		const [expired, revoked, left] = [await keyFor(researcher), await keyFor(researcher), await keyFor(researcher)];
		expect((await get(of("/cells"), bearer(expired))).status).toBe(200);
		await owner.query(
			"update auth.api_key set created_at = now() - interval '9 days', expires_at = now() - interval '1 day' where key_hash = $1",
			[hashed(expired)],
		);
		const late = await get(of("/cells"), bearer(expired));
		expect([late.status, late.headers.get("www-authenticate")]).toEqual([401, expect.stringContaining("Bearer")]);
		expect(await late.json()).toMatchObject({ title: "This key has expired" });

		const { rows } = await owner.query("select api_key_id from auth.api_key where key_hash = $1", [hashed(revoked)]);
		const stranger = await addResearcher("Otis Fell");
		expect(await revokeApiKey(stranger, rows[0].api_key_id)).toBe("not_found");
		expect((await get(of("/cells"), bearer(revoked))).status).toBe(200);
		expect(await revokeApiKey(researcher, rows[0].api_key_id)).toBe("revoked");
		expect(await revokeApiKey(researcher, rows[0].api_key_id)).toBe("revoked");
		expect((await get(of("/cells"), bearer(revoked))).status).toBe(401);

		await owner.query("update auth.role_grant set revoked_at = now(), revoked_by = granted_by where person_id = $1", [
			researcher.personId,
		]);
		const rests = await get(of("/cells"), bearer(left));
		expect(rests.status).toBe(403);
		expect(await rests.json()).toMatchObject({ type: "https://survey.example/api#access_ended" });
		expect((await get(of("/cells"), bearer(`tally_${"x".repeat(43)}`))).status).toBe(401);
		expect((await get(of("/cells"), { headers: { authorization: "Basic abc" } })).status).toBe(401);
	});

	test("open what they were made for, and of nothing else name the right that is missing", async () => {
		const key = await keyFor(await addResearcher("Pia Lund"), ["figures"]);
		expect((await get(of("/cells"), bearer(key))).status).toBe(200);
		const refused = await get(of("/files/cells.csv"), bearer(key));
		expect(refused.status).toBe(403);
		expect(refused.headers.get("www-authenticate")).toContain('error="insufficient_scope", scope="files"');
		const detail = "This key does not open files. Make one that does at https://survey.example/dataroom/keys.";
		const errors = [{ parameter: "authorization", detail, allowed: ["files"] }];
		expect(ProblemDetails.parse(await refused.json())).toMatchObject({ errors });
	});

	test("an address that asks too often is told how long to wait, and another is not held up", async () => {
		const headers = { "x-forwarded-for": "192.0.2.7" };
		const ask = (at: string) => get(at, { headers, method: "HEAD" });
		for (let asked = 0; asked < apiLimits.open; asked++) await ask("");
		// Who tries keys has no more tries than who has none.
		expect((await get("", { headers: { ...headers, authorization: `Bearer tally_${"y".repeat(43)}` } })).status).toBe(
			429,
		);
		const refused = await ask("");
		expect(refused.status).toBe(429);
		expect(Number(refused.headers.get("retry-after"))).toBeGreaterThan(0);
		expect(refused.headers.get("ratelimit")).toMatch(/^"open";r=0;t=\d+$/);
		expect((await get("", { headers: { "x-forwarded-for": "192.0.2.8" } })).status).toBe(200);
	});
});

test("no answer about a release holds a number of a withheld cell", async () => {
	const hidden = await addOddRelease(owner, 2035);
	await owner.query("alter table release.figure disable trigger figure_of_shown_cell");
	await owner.query(
		"insert into release.figure values ($1, 'crop_loss', 'apple', '19113', $2, 1.0625, 0.1, 70, 76, 'steady')",
		[hidden.releaseId, secret],
	);
	await owner.query("alter table release.figure enable trigger figure_of_shown_cell");
	await makeReleaseFiles(hidden);
	const there = await owner.query("select from release.figure where value = $1", [secret]);
	expect(there.rowCount).toBe(1);
	const lists = [
		"",
		"/measures",
		"/crops",
		"/areas",
		"/cells",
		"/cells?area=19113",
		"/cells?status=Q",
		"/geometry",
		"/files",
	];
	for (const at of lists) {
		for (const accept of ["application/json", "text/csv, application/json;q=0.5"]) {
			const response = await get(`/releases/${hidden.number}${at}`, { headers: { accept } });
			const told = `${await response.text()} ${JSON.stringify([...response.headers])}`;
			expect(response.status).toBe(200);
			expect(told, at).not.toContain(`${secret}`);
			expect(told, at).not.toContain("1.0625");
		}
	}
	const { data } = await page(`/releases/${hidden.number}/cells?area=19113&measure=crop_loss`);
	expect(data[0]).toMatchObject({ status: "Q", value: null, standard_error: null, respondents_band: null });
});

test("a withdrawn release keeps its address, and its figures and files are gone", async () => {
	const gone = await addReleaseWithFiles(owner, 2036);
	const at = `/releases/${gone.number}`;
	expect((await get(`${at}/files/cells.csv`)).status).toBe(200);
	await owner.query(
		`insert into release.withdrawal (release_id, reason) values ($1, '{"en": "Wrong.", "es": "Mal."}')`,
		[gone.releaseId],
	);
	for (const part of ["/measures", "/crops", "/areas", "/cells", "/geometry", "/files", "/files/cells.csv"]) {
		expect((await problem(at + part)).status, part).toBe(410);
	}
	expect(await (await get(at)).json()).toMatchObject({ state: "withdrawn", withdrawal_reason_es: "Mal." });
	const listed = (await page("/releases?state=withdrawn")).data;
	expect(listed.map(({ number }) => number)).toContain(gone.number);
});

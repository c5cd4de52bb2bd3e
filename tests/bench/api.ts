import { mkdtemp, rm, writeFile } from "node:fs/promises";
import { Agent, get } from "node:http";
import { tmpdir } from "node:os";
import path from "node:path";
import { setTimeout as pause } from "node:timers/promises";
import { pathToFileURL } from "node:url";
import { Client } from "pg";
import { median, quantile } from "simple-statistics";
import { mailWords } from "#app/mail/words.server.ts";
import { findFileSource } from "#app/publish/files/file-source.server.ts";
import { makeFiles } from "#app/publish/files/make-files.server.ts";
import { useDatabase } from "#tests/database/surveys-fixture.ts";
import { startStack, type Stack } from "#tests/helpers/stack.ts";
import { addLargeRelease } from "./large-release.ts";
import type { Bench } from "./line.ts";
import { timed } from "./timing.ts";

/** Requests of one kind before another has its turn, and how many are under way at once. */
const inTurn = 80;
const atOnce = 4;
const pageRows = 1000;

/**
 * What the API costs beside a route that does nothing but send as many bytes, through the same server and its middleware; then
 * how long the files of a large release take, and what readers of public pages notice meanwhile.
 */
export async function api({ print, runs }: Bench): Promise<void> {
	const folder = await mkdtemp(path.join(tmpdir(), "tallygrove-bench-"));
	try {
		const sameBytes = path.join(folder, "body.json");
		const build = path.join(folder, "server.mjs");
		await writeFile(build, buildWithEmptyRoute(sameBytes));
		await using stack = await startStack({ build });
		const release = await addLargeRelease(stack.database.ownerUrl);
		await throughput({ print, runs }, stack, `/api/v1/releases/${release.number}/cells`, sameBytes);
		// One that was not there when the worker started, which makes what is missing by itself.
		await files(print, stack, await addLargeRelease(stack.database.ownerUrl));
	} finally {
		await rm(folder, { recursive: true });
	}
}

/** The production build with one resource route more, which is in no build that is ever served. */
function buildWithEmptyRoute(bodyFile: string): string {
	const real = JSON.stringify(pathToFileURL(path.resolve("build/server/index.js")).href);
	return `import { readFileSync } from "node:fs";
		import { routes as own } from ${real};
		export * from ${real};
		let body;
		const loader = () => new Response((body ??= readFileSync(${JSON.stringify(bodyFile)})),
			{ headers: { "content-type": "application/json; charset=utf-8" } });
		export const routes = { ...own, empty: { id: "empty", parentId: "root", path: "empty", module: { loader } } };`;
}

type Got = { status: number; etag: string; body: Buffer };

/** Each request comes from another address, so that no limit of requests is met. */
let asked = 0;
function ask(url: string, headers: Record<string, string> = {}, agent = new Agent()): Promise<Got> {
	asked += 1;
	const from = `10.${(asked >> 16) & 255}.${(asked >> 8) & 255}.${asked & 255}`;
	return new Promise((resolve, reject) => {
		get(url, { agent, headers: { "x-forwarded-for": from, ...headers } }, (response) => {
			const parts: Buffer[] = [];
			response.on("data", (part: Buffer) => parts.push(part));
			response.on("end", () =>
				resolve({
					status: response.statusCode ?? 0,
					etag: String(response.headers.etag ?? ""),
					body: Buffer.concat(parts),
				}),
			);
		}).on("error", reject);
	});
}

/** Answers in a second, of `inTurn` requests. */
async function perSecond(address: (index: number) => string, headers: Record<string, string>, status: number) {
	// Of its own: what an earlier turn left open, the server may be closing just now.
	const agent = new Agent({ keepAlive: true, maxSockets: atOnce });
	const began = performance.now();
	let next = 0;
	const asker = async () => {
		while (next < inTurn) {
			const got = await ask(address(next++), headers, agent);
			if (got.status !== status) throw new Error(`answered ${got.status}: ${got.body.toString().slice(0, 200)}`);
		}
	};
	await Promise.all(Array.from({ length: atOnce }, asker));
	agent.destroy();
	return inTurn / ((performance.now() - began) / 1000);
}

async function throughput(
	{ print, runs }: Pick<Bench, "print" | "runs">,
	{ baseUrl }: Stack,
	list: string,
	file: string,
) {
	const page = `${baseUrl}${list}?limit=${pageRows}`;
	const { body, etag } = await ask(page);
	await writeFile(file, body);
	let fresh = 0;
	const kinds: Record<string, () => Promise<number>> = {
		empty: () => perSecond(() => `${baseUrl}/empty`, {}, 200),
		// A page that nobody has asked for: each begins after another number of rows.
		first: () => perSecond(() => `${baseUrl}${list}?limit=${pageRows - (fresh++ % 900)}`, {}, 200),
		again: () => perSecond(() => page, {}, 200),
		same: () => perSecond(() => page, { "if-none-match": etag }, 304),
	};
	const taken: Record<string, number[]> = {};
	for (let run = 0; run <= runs; run++)
		for (const [kind, work] of Object.entries(kinds)) {
			const rate = await work();
			if (run > 0) (taken[kind] ??= []).push(rate);
		}
	const of = (kind: string) => median(taken[kind]!);
	const floor = of("empty");
	const unit = "answers a second";
	const kilobytes = Math.round(body.length / 1000);
	print(
		{ name: `an empty route with ${kilobytes} kB`, value: floor, unit },
		{
			name: `${pageRows} cells asked for again`,
			value: of("again"),
			unit,
			floor,
			goal: "at least half of the empty route",
		},
		{ name: "cells asked for the first time, 550 on average", value: of("first"), unit, floor },
		{ name: "cells that the asker has, 304", value: of("same"), unit, floor, goal: "at least 0.8 of the empty route" },
	);
}

/** Makes the files as after a publication, in the worker, while public pages are read. */
async function files(
	print: Bench["print"],
	stack: Stack,
	{ releaseId, number, rows }: { releaseId: string; number: number; rows: number },
) {
	const pages = [`${stack.baseUrl}/data/${number}`, `${stack.baseUrl}/data`, `${stack.baseUrl}/methods`];
	await readPages(pages, (count) => count >= 6);
	const calm = await readPages(pages, (count) => count >= 60);
	const app = new Client({ connectionString: stack.database.appUrl });
	await app.connect();
	try {
		const began = performance.now();
		await app.query(
			"select graphile_worker.add_job('make_release_files', payload := json_build_object('releaseId', $1::text))",
			[releaseId],
		);
		let seconds = 0;
		const watch = (async () => {
			while ((await app.query("select from release.file where release_id = $1 limit 1", [releaseId])).rowCount === 0) {
				if (performance.now() - began > 300_000) throw new Error(`no files:\n${stack.output()}`);
				await pause(100);
			}
			seconds = (performance.now() - began) / 1000;
		})();
		const beside = await readPages(pages, () => seconds > 0);
		await watch;
		useDatabase(stack.database);
		const words = { en: await mailWords("en", "dataroom"), es: await mailWords("es", "dataroom") };
		const alone = await timed(async () => makeFiles((await findFileSource(releaseId, words, stack.baseUrl))!));
		const sized = await app.query<{ bytes: number }>(
			"select sum(byte_count)::int as bytes from release.file where release_id = $1",
			[releaseId],
		);
		print(
			{
				name: `files of ${rows.toLocaleString("en")} cells, server live`,
				value: seconds,
				unit: "s",
				goal: "under 20 for 25,000 cells",
			},
			{ name: "making them alone", value: alone.processor! / 1000, unit: "s of the processor" },
			{ name: "those files together", value: sized.rows[0]!.bytes / 1e6, unit: "MB" },
			{
				name: "99 of 100 public pages meanwhile",
				value: quantile(beside, 0.99),
				unit: "ms",
				floor: quantile(calm, 0.99),
			},
		);
	} finally {
		await app.end();
	}
}

/** One reader who opens page after page. */
async function readPages(pages: string[], enough: (count: number) => boolean): Promise<number[]> {
	const times: number[] = [];
	for (let count = 0; !enough(count); count++) {
		const began = performance.now();
		const { status } = await ask(pages[count % pages.length]!);
		if (status !== 200) throw new Error(`a page answered ${status}`);
		times.push(performance.now() - began);
	}
	return times;
}

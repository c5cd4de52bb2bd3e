import { setTimeout as pause } from "node:timers/promises";
import lighthouse from "lighthouse";
import { chromium } from "playwright-core";
import { median } from "simple-statistics";
import { scopedTransaction } from "#app/auth/scope.server.ts";
import { createPersonalLink } from "#app/collect/personal-link.server.ts";
import { freePort } from "#db/setup/ports.mjs";
import { askGrower } from "#tests/database/answering-fixture.ts";
import { addPerson, connectOwner, useDatabase } from "#tests/database/surveys-fixture.ts";
import { measuringSettings } from "#tests/helpers/browser.ts";
import { startStack } from "#tests/helpers/stack.ts";
import type { Bench, Line } from "./line.ts";

/** What a phone on a slow line meets, as Lighthouse simulates it: the median of the runs, of a first visit each. */
type Visit = { kilobytes: number; performance: number; accessibility: number; bestPractices: number; paintMs: number };
/** Where a page shall come to; null where nothing is asked of it. */
type Goals = { kilobytes: number | null; paintMs: number | null; performance: number; others: number };
const growersGoals: Goals = { kilobytes: 100, paintMs: 1800, performance: 95, others: 95 };
const publicGoals: Goals = { kilobytes: null, paintMs: null, performance: 90, others: 100 };

/** Growers' pages and public ones, with the production build. */
export async function pages(bench: Bench): Promise<void> {
	await growersPages(bench);
	await publicPages(bench);
}

/** What a first-time reader opens, of the demo. */
async function publicPages({ print, runs }: Bench): Promise<void> {
	await using stack = await startStack({ seed: "demo" });
	await using owner = await connectOwner(stack.database.ownerUrl);
	await workIsDone(stack.database.appUrl);
	const { rows } = await owner.query<{ slug: string; number: number }>(
		`select slug, number from publish.report join release.release using (release_id)
		where state = 'published' order by report.published_at desc limit 1`,
	);
	const { slug, number } = rows[0]!;
	const looked: [string, string][] = [
		["home", `${stack.baseUrl}/`],
		["a report", `${stack.baseUrl}/reports/${slug}`],
		["a release's page", `${stack.baseUrl}/data/${number}`],
	];
	await lookAt({ print, runs }, looked, "", publicGoals);
}

/** A worker that starts makes the files and PDFs that the demo lacks; nothing is measured beside that. */
async function workIsDone(appUrl: string): Promise<void> {
	await using app = await connectOwner(appUrl);
	const waiting = "select 1 from graphile_worker.jobs where run_at <= now() and attempts < max_attempts limit 1";
	for (let second = 0; second < 180; second += 1) {
		if ((await app.query(waiting)).rowCount === 0) return;
		await pause(1000);
	}
	throw new Error("the demo's files were not made in three minutes");
}

/** From the mail's link to the first screen. */
async function growersPages({ print, runs }: Bench): Promise<void> {
	await using stack = await startStack();
	useDatabase(stack.database);
	await using owner = await connectOwner(stack.database.ownerUrl);
	const associate = await addPerson(owner, "Del Fenwick", ["19"]);
	const { place, step } = await askGrower(owner, associate);
	const expiresAt = new Date(Date.now() + 86_400_000);
	const token = await scopedTransaction({ kind: "network" }, (trx) => createPersonalLink(trx, { ...place, expiresAt }));
	const address = `${stack.baseUrl}/answer/${place.surveyId}/${place.operationId}`;
	const opened = await fetch(`${stack.baseUrl}/r/${token}`, {
		method: "POST",
		redirect: "manual",
		headers: { origin: stack.baseUrl },
	});
	const cookie = opened.headers
		.getSetCookie()
		.map((line) => line.split(";")[0])
		.join("; ");
	const looked: [string, string][] = [
		["the mail's link", `${stack.baseUrl}/r/${token}`],
		["a survey's first page", address],
		["a survey's screen", `${address}/ask/${step}`],
		["a survey's review", `${address}/review`],
	];
	await lookAt({ print, runs }, looked, cookie, growersGoals);
}

async function lookAt(
	{ print, runs }: Pick<Bench, "print" | "runs">,
	looked: [string, string][],
	cookie: string,
	goals: Goals,
): Promise<void> {
	const port = await freePort();
	const { executablePath, args } = measuringSettings;
	const browser = await chromium.launch({ executablePath, args: [...args, `--remote-debugging-port=${port}`] });
	try {
		for (const [name, url] of looked) {
			const visits: Visit[] = [];
			for (let run = 0; run < Math.min(runs, 3); run++) visits.push(await visit(url, cookie, port));
			print(...linesOf(name, visits, goals));
		}
	} finally {
		await browser.close();
	}
}

async function visit(url: string, cookie: string, port: number): Promise<Visit> {
	const result = await lighthouse(url, {
		port,
		output: "json",
		logLevel: "silent",
		onlyCategories: ["performance", "accessibility", "best-practices"],
		...(cookie && { extraHeaders: { Cookie: cookie } }),
	});
	if (!result || result.lhr.runtimeError)
		throw new Error(`${url}: ${result?.lhr.runtimeError?.message ?? "no result"}`);
	const { audits, categories, finalDisplayedUrl } = result.lhr;
	if (finalDisplayedUrl !== url) throw new Error(`${url} led to ${finalDisplayedUrl}`);
	const score = (key: string) => (categories[key]?.score ?? 0) * 100;
	return {
		kilobytes: sizeOf(audits["network-requests"]) / 1000,
		performance: score("performance"),
		accessibility: score("accessibility"),
		bestPractices: score("best-practices"),
		paintMs: audits["largest-contentful-paint"]?.numericValue ?? NaN,
	};
}

/** Bytes that came over the line for the page itself; the font may follow, and what is fetched for later visits is not waited for. */
function sizeOf(requests: { details?: unknown } | undefined): number {
	const details = requests?.details as { items: { resourceType: string; transferSize: number }[] } | undefined;
	if (!details) throw new Error("Lighthouse tells of no requests");
	const first = new Set(["Document", "Script", "Stylesheet"]);
	return details.items
		.filter(({ resourceType }) => first.has(resourceType))
		.reduce((sum, item) => sum + item.transferSize, 0);
}

const score = (least: number) => ({ unit: "Lighthouse score", goal: least === 100 ? "100" : `at least ${least}` });

function linesOf(name: string, visits: Visit[], goals: Goals): Line[] {
	const of = (key: keyof Visit) => median(visits.map((one) => one[key]));
	const { kilobytes, paintMs, performance, others } = goals;
	const size = { value: of("kilobytes"), unit: "kB compressed", ...(kilobytes && { goal: `at most ${kilobytes}` }) };
	return [
		{ name: `${name}: first view`, ...size },
		{ name: `${name}: largest paint`, value: of("paintMs"), unit: "ms", ...(paintMs && { goal: `under ${paintMs}` }) },
		{ name: `${name}: performance`, value: of("performance"), ...score(performance) },
		{ name: `${name}: accessibility`, value: of("accessibility"), ...score(others) },
		{ name: `${name}: best practices`, value: of("bestPractices"), ...score(others) },
	];
}

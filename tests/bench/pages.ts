import lighthouse from "lighthouse";
import { chromium } from "playwright-core";
import { median } from "simple-statistics";
import { scopedTransaction } from "#app/auth/scope.server.ts";
import { createPersonalLink } from "#app/collect/personal-link.server.ts";
import { freePort } from "#db/setup/ports.mjs";
import { askGrower } from "#tests/database/answering-fixture.ts";
import { addPerson, connectOwner, useDatabase } from "#tests/database/surveys-fixture.ts";
import { chromiumSettings } from "#tests/helpers/browser.ts";
import { startStack } from "#tests/helpers/stack.ts";
import type { Bench, Line } from "./line.ts";

/** What a phone on a slow line meets, as Lighthouse simulates it: the median of the runs, of a first visit each. */
type Visit = { kilobytes: number; performance: number; accessibility: number; bestPractices: number; paintMs: number };
const most = { kilobytes: 100, paintMs: 1800, score: 95 };

/** The grower's pages, from the mail's link to the first screen, with the production build. */
export async function pages({ print, runs }: Bench): Promise<void> {
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
	const port = await freePort();
	const { executablePath, args } = chromiumSettings;
	const browser = await chromium.launch({ executablePath, args: [...args, `--remote-debugging-port=${port}`] });
	try {
		for (const [name, url] of looked) {
			const visits: Visit[] = [];
			for (let run = 0; run < Math.min(runs, 3); run++) visits.push(await visit(url, cookie, port));
			print(...linesOf(name, visits));
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
		extraHeaders: { Cookie: cookie },
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

function linesOf(name: string, visits: Visit[]): Line[] {
	const of = (key: keyof Visit) => median(visits.map((one) => one[key]));
	const atLeast = `at least ${most.score}`;
	return [
		{ name: `${name}: first view`, value: of("kilobytes"), unit: "kB compressed", goal: `at most ${most.kilobytes}` },
		{ name: `${name}: largest paint`, value: of("paintMs"), unit: "ms", goal: `under ${most.paintMs}` },
		{ name: `${name}: performance`, value: of("performance"), unit: "Lighthouse score", goal: atLeast },
		{ name: `${name}: accessibility`, value: of("accessibility"), unit: "Lighthouse score", goal: atLeast },
		{ name: `${name}: best practices`, value: of("bestPractices"), unit: "Lighthouse score", goal: atLeast },
	];
}

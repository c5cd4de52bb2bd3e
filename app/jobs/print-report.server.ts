import { execFile } from "node:child_process";
import { access, constants, mkdtemp, readFile, rm } from "node:fs/promises";
import { tmpdir } from "node:os";
import path from "node:path";
import { promisify } from "node:util";
import { scopedTransaction } from "#app/auth/scope.server.ts";
import type { Language } from "#app/i18n/language.ts";
import { env } from "#app/lib/env.server.ts";
import { log } from "#app/lib/log.server.ts";
import { countTakenAway, keepReportFile } from "#app/publish/drafting/report-files.server.ts";
import { findPublishedById } from "#app/publish/reports.server.ts";

const run = promisify(execFile);
const mostSeconds = 90;

/**
 * Prints a published report's own page to a tagged PDF and keeps it. Where no browser is installed that is noted, for the
 * desk to see, and the page stands without a PDF.
 */
export async function printReport({ reportId, language }: { reportId: string; language: Language }): Promise<void> {
	const report = await findPublishedById(reportId);
	if (!report) return;
	const goneBefore = await scopedTransaction({ kind: "none" }, (trx) => countTakenAway(trx, reportId));
	const browser = await findBrowser();
	const address = `${env().BASE_URL}/reports/${report.slug}?version=${report.version}`;
	if (browser) await requirePage(address);
	const made = browser ? await print(browser, address, language) : ({ problem: "no_browser" } as const);
	await scopedTransaction({ kind: "none" }, (trx) => keepReportFile(trx, reportId, language, made, goneBefore));
	if ("problem" in made) log.warn({ reportId, language, problem: made.problem }, "no PDF of a report");
}

/** A browser prints its own words about a server that does not answer as gladly as a report. @throws so that it is tried again. */
async function requirePage(address: string): Promise<void> {
	const answer = await fetch(address, { method: "HEAD", signal: AbortSignal.timeout(mostSeconds * 1000) });
	if (!answer.ok) throw new Error(`${address} answered ${answer.status}`);
}

/** Where Debian's packages put it, unless the setting names another. */
const browsers = ["/usr/bin/chromium-headless-shell", "/usr/bin/chromium", "/usr/bin/chromium-browser"];

async function findBrowser(): Promise<string | undefined> {
	const named = env().CHROMIUM_PATH;
	for (const file of named ? [named] : browsers) {
		const runs = await access(file, constants.X_OK).then(
			() => true,
			() => false,
		);
		if (runs) return file;
	}
	return undefined;
}

type Printed = { bytes: Buffer } | { problem: "failed" };

async function print(browser: string, address: string, language: Language): Promise<Printed> {
	const folder = await mkdtemp(path.join(tmpdir(), "tallygrove-print-"));
	const file = path.join(folder, "report.pdf");
	try {
		await run(browser, [...switches(folder, language), `--print-to-pdf=${file}`, address], {
			timeout: mostSeconds * 1000,
			killSignal: "SIGKILL",
		});
		const bytes = await readFile(file);
		if (bytes.length < 1000 || bytes.subarray(0, 5).toString() !== "%PDF-") return { problem: "failed" };
		return { bytes };
	} catch (error) {
		log.error({ error: String(error) }, "printing a report failed");
		return { problem: "failed" };
	} finally {
		await rm(folder, { recursive: true, force: true });
	}
}

/** Tags for screen readers are Chromium's default; the outline is made of the headings. */
function switches(folder: string, language: Language): string[] {
	return [
		"--headless",
		"--disable-gpu",
		"--disable-dev-shm-usage",
		"--no-first-run",
		"--no-pdf-header-footer",
		"--generate-pdf-document-outline",
		`--accept-lang=${language}`,
		`--lang=${language}`,
		`--user-data-dir=${path.join(folder, "profile")}`,
		// Its sandbox cannot be had as root, where containers run; the page is our own.
		...(process.getuid?.() === 0 ? ["--no-sandbox"] : []),
	];
}

// The browser of the browser tests: Debian's own, so that no test depends on a download from elsewhere.
import { accessSync, constants } from "node:fs";
import { delimiter, join } from "node:path";
import { installDebian } from "./debian.mjs";
import { Stop } from "./steps.mjs";

/**
 * The shell is the same browser without its windows, and does the same work in little more than half the time. An installed
 * whole one serves where it cannot be had.
 */
const shell = "chromium-headless-shell";
const others = ["chromium", "chromium-browser"];

function findProgram(names) {
	const folders = ["/usr/bin", ...(process.env.PATH ?? "").split(delimiter)];
	return names.flatMap((name) => folders.map((folder) => join(folder, name))).find(isProgram);
}

function isProgram(path) {
	try {
		accessSync(path, constants.X_OK);
		return true;
	} catch {
		return false;
	}
}

/** @returns the path of Chromium, installed first where that is allowed. */
export async function ensureChromium() {
	const named = process.env.CHROMIUM_PATH;
	const found = named && isProgram(named) ? named : findProgram([shell]);
	if (found) return found;
	try {
		await installDebian([shell], { what: "Chromium (for the browser tests)" });
	} catch (error) {
		const whole = findProgram(others);
		if (whole) return whole;
		throw error;
	}
	const installed = findProgram([shell, ...others]);
	if (!installed) throw new Stop("Chromium was installed but is not found. Set CHROMIUM_PATH to its program.");
	return installed;
}

/** What reads the text of a PDF, to hold it against the page. */
export async function ensurePdfReader() {
	const found = findProgram(["pdftotext"]);
	if (found) return found;
	await installDebian(["poppler-utils"], { what: "pdftotext (for the tests of printed reports)" });
	const installed = findProgram(["pdftotext"]);
	if (!installed) throw new Stop("poppler-utils was installed but pdftotext is not found.");
	return installed;
}

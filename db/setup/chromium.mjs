// The browser of the browser tests: Debian's own, so that no test depends on a download from elsewhere.
import { accessSync, constants } from "node:fs";
import { delimiter, join } from "node:path";
import { installDebian } from "./debian.mjs";
import { Stop } from "./steps.mjs";

function findChromium() {
	const folders = ["/usr/bin", ...(process.env.PATH ?? "").split(delimiter)];
	const places = folders.flatMap((folder) => [join(folder, "chromium"), join(folder, "chromium-browser")]);
	return [process.env.CHROMIUM_PATH, ...places].find((path) => {
		try {
			accessSync(path ?? "", constants.X_OK);
			return true;
		} catch {
			return false;
		}
	});
}

/** @returns the path of Chromium, installed first where that is allowed. */
export async function ensureChromium() {
	const found = findChromium();
	if (found) return found;
	await installDebian(["chromium"], { what: "Chromium (for the browser tests)" });
	const installed = findChromium();
	if (!installed) throw new Stop("Chromium was installed but is not found. Set CHROMIUM_PATH to its program.");
	return installed;
}

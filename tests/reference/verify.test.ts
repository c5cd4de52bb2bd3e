import { cp, mkdtemp, readFile, rm, writeFile } from "node:fs/promises";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterEach, expect, onTestFinished, test, vi } from "vitest";
import { loadCheckers, main, verifyFolder } from "#tests/reference/verify.ts";

const data = join(import.meta.dirname, "data/estimation");
const said = vi.spyOn(console, "log").mockImplementation(() => {});
const complained = vi.spyOn(console, "error").mockImplementation(() => {});
afterEach(() => vi.clearAllMocks());

async function folderWith(...files: string[]): Promise<string> {
	const folder = await mkdtemp(join(tmpdir(), "verify-"));
	onTestFinished(() => rm(folder, { recursive: true }));
	for (const file of files) await cp(join(data, file), join(folder, file));
	return folder;
}

test("a folder that agrees passes, and each file has its line", async () => {
	const folder = await folderWith("apistrat.csv", "api_strat_expected.json");
	expect(await main(folder)).toBe(0);
	const lines = said.mock.calls.map(([line]) => String(line));
	expect(lines.some((line) => /^api_strat_expected\.json +269 .*pass/.test(line))).toBe(true);
	expect(lines.some((line) => /^apistrat\.csv .*input/.test(line))).toBe(true);
});

test("one digit changed in the expected figures fails", async () => {
	const folder = await folderWith("apistrat.csv", "api_strat_expected.json");
	const path = join(folder, "api_strat_expected.json");
	const text = await readFile(path, "utf8");
	await writeFile(path, text.replace('"se": 9.4089408027845796', '"se": 9.4089409027845796'));
	expect(await main(folder)).toBe(1);
	expect(said.mock.calls.flat().join("\n")).toContain("mean_api00.se: expected 9.4089409027");
});

test("other answers in the input fail too: figures are computed, not looked up", async () => {
	const folder = await folderWith("apistrat.csv", "api_strat_expected.json");
	const path = join(folder, "apistrat.csv");
	await writeFile(path, (await readFile(path, "utf8")).replace(",840,816,276,241,", ",841,816,276,241,"));
	expect(await main(folder)).toBe(1);
});

test("an absent input is told and does not stop the others", async () => {
	const folder = await folderWith("synthetic_strata.csv", "apistrat.csv", "api_strat_expected.json");
	const results = await verifyFolder(folder, await loadCheckers());
	expect(results.map(({ file, verdict }) => [file, verdict])).toEqual([
		["api_strat_expected.json", "pass"],
		["apistrat.csv", "input"],
		["synthetic_strata.csv", "absent"],
	]);
	expect(results[2]?.note).toContain("synthetic_frame.csv");
});

test("a broken file fails with its reason", async () => {
	const folder = await folderWith("apistrat.csv");
	await writeFile(join(folder, "api_strat_expected.json"), "{");
	const results = await verifyFolder(folder, await loadCheckers());
	expect(results[0]).toMatchObject({ verdict: "fail", note: expect.stringContaining("JSON") });
});

test("a missing folder, an empty one and none at all are refused", async () => {
	expect(await main(join(data, "nowhere"))).toBe(1);
	expect(await main(await folderWith())).toBe(1);
	expect(await main(undefined)).toBe(1);
	expect(complained.mock.calls.map(([line]) => String(line).split(" ")[0])).toEqual(["There", "Nothing", "Usage:"]);
});

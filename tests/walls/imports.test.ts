import { execFileSync } from "node:child_process";
import { join } from "node:path";
import { beforeAll, describe, expect, test } from "vitest";
import { idleExceptions, wrongImports } from "./imports/findings.ts";
import { type Modules, parseModule, readModules } from "./imports/modules.ts";

const root = join(import.meta.dirname, "../..");

describe("the project", () => {
	let modules: Modules;
	beforeAll(async () => {
		modules = await readModules(root, sources());
	});

	test("every import keeps to the table of who may import whom", () => {
		expect(modules.size).toBeGreaterThan(200);
		expect(wrongImports(modules)).toEqual([]);
	});

	test("every import names a file that is there", () => {
		const missing = [...modules].flatMap(([file, { imports }]) =>
			imports
				.filter(({ to }) => /^(app|db|fakes)\/.*\.tsx?$/.test(to) && !modules.has(to))
				.map(({ to }) => `${file}: ${to}`),
		);
		expect(missing).toEqual([]);
	});

	test("every exception is still made use of", () => {
		expect(idleExceptions(modules)).toEqual([]);
	});
});

/** Sources that ship or set up, with those not yet committed; tests may import what they test. */
function sources(): string[] {
	const listed = execFileSync("git", ["ls-files", "-co", "--exclude-standard", "app", "db", "fakes"], { cwd: root });
	return listed
		.toString()
		.split("\n")
		.filter((file) => /\.(ts|tsx|mts|mjs)$/.test(file) && !/\.test\.tsx?$/.test(file));
}

/** A made-up project that keeps every rule; each case below adds one file that breaks one. */
const sound: Record<string, string> = {
	"app/lib/sum.ts": `export const sum = 1;`,
	"app/lib/env.server.ts": `import { readFileSync } from "node:fs";`,
	"app/i18n/language.ts": `export const languages = ["en"];`,
	"app/components/page.tsx": `import { sum } from "#app/lib/sum.ts"; import type { Crop } from "#app/directory/crops.ts";`,
	"app/auth/scope.server.ts": `import { connect } from "#db/connect.ts"; export const scopedTransaction = connect;`,
	"app/auth/guard.server.ts": `import { scopedTransaction } from "./scope.server.ts"; export const requirePerson = 1;`,
	"app/directory/crops.ts": `export type Crop = string; export const crops = [];`,
	"app/collect/answers.server.ts": `import type { Crop } from "#app/directory/crops.ts"; import { type Trx } from "#app/auth/scope.server.ts";`,
	"app/review/findings.server.ts": `import type { Crop } from "#app/directory/crops.ts"; import { type Trx } from "#app/auth/scope.server.ts";`,
	"app/estimate/ratio.ts": `import { sum } from "#app/lib/sum.ts"; export const at = new Date(0);`,
	"app/protect/shares.server.ts": `import type { DB } from "#db/schema.ts";`,
	"app/release/publish.server.ts": `export type Released = 1;`,
	"app/publish/reader.server.ts": `import { connect } from "#db/connect.ts"; export const reader = connect;`,
	"app/publish/cells.server.ts": `import { reader } from "./reader.server.ts";`,
	"app/publish/drafting/reports.server.ts": `import type { Trx } from "#app/auth/scope.server.ts";`,
	"app/jobs/queue.server.ts": `export const queueJob = 1;`,
	"app/routes/public/map.tsx": `import "./map.css"; import { requirePerson } from "#app/auth/guard.server.ts"; import { cells } from "#app/publish/cells.server.ts";`,
	"app/routes/desk/survey.tsx": `import { answers } from "#app/collect/answers.server.ts"; export { queueJob } from "#app/jobs/queue.server.ts";`,
	"db/connect.ts": `import pg from "pg";`,
	"db/migrations/2026-12-01_one.ts": `import { sql } from "kysely";`,
	"fakes/mail/server.ts": `import { createServer } from "node:http";`,
};

function findingsWith(added: Record<string, string>): string[] {
	const files = Object.entries({ ...sound, ...added });
	return wrongImports(new Map(files.map(([file, text]) => [file, parseModule(file, text)])));
}

describe("the checker", () => {
	test("finds nothing in a sound project", () => {
		expect(findingsWith({})).toEqual([]);
	});

	test.each<[string, Record<string, string>, string]>([
		[
			"lib importing a stage",
			{ "app/lib/a.ts": `import { crops } from "#app/directory/crops.ts";` },
			"app/lib/a.ts imports app/directory/crops.ts",
		],
		[
			"lib importing i18n as a type",
			{ "app/lib/a.ts": `import type { languages } from "#app/i18n/language.ts";` },
			"app/lib/a.ts imports types of app/i18n",
		],
		[
			"a component running a stage",
			{ "app/components/a.tsx": `import { crops } from "#app/directory/crops.ts";` },
			"app/components/a.tsx imports app/directory",
		],
		[
			"a component importing a route",
			{ "app/components/a.tsx": `import type A from "#app/routes/desk/survey.tsx";` },
			"app/components/a.tsx imports types of app/routes",
		],
		[
			"a stage running the stage to its left",
			{ "app/tally/a.ts": `import { crops } from "#app/directory/crops.ts";` },
			"app/tally/a.ts imports app/directory",
		],
		[
			"a stage importing a type from its right",
			{ "app/collect/a.ts": `import { type Released } from "#app/release/publish.server.ts";` },
			"app/collect/a.ts imports types of app/release",
		],
		[
			"review importing a type of the tallies to its right",
			{ "app/review/a.ts": `import type { Tally } from "#app/tally/tally.ts";` },
			"app/review/a.ts imports types of app/tally",
		],
		[
			"a clock in a check of review",
			{ "app/review/a.ts": `export const now = () => Date.now();` },
			"app/review/a.ts uses Date.now",
		],
		[
			"a stage queuing jobs without a reason",
			{ "app/release/a.server.ts": `import { queueJob } from "#app/jobs/queue.server.ts";` },
			"app/release/a.server.ts imports app/jobs",
		],
		[
			"anything importing a fake",
			{ "app/jobs/a.ts": `import { s } from "#fakes/mail/server.ts";` },
			"app/jobs/a.ts imports fakes/",
		],
		[
			"a fake importing the app",
			{ "fakes/mail/a.ts": `import { sum } from "#app/lib/sum.ts";` },
			"fakes/mail/a.ts imports app/lib",
		],
		[
			"a migration importing the app",
			{ "db/migrations/b.ts": `import { crops } from "../../app/directory/crops.ts";` },
			"db/migrations/b.ts imports app/directory",
		],
		[
			"a job rendering a component",
			{ "app/jobs/a.ts": `import { Page } from "#app/components/page.tsx";` },
			"app/jobs/a.ts imports app/components",
		],
		[
			"the root running a stage",
			{ "app/root.tsx": `import { crops } from "#app/directory/crops.ts";` },
			"app/root.tsx imports app/directory",
		],
		[
			"a second connection",
			{ "app/jobs/a.server.ts": `import { connect } from "#db/connect.ts";` },
			"app/jobs/a.server.ts imports db/connect.ts",
		],
		[
			"a folder that the table does not know",
			{ "app/utils/a.ts": `export const a = 1;` },
			"app/utils/a.ts lies in no folder",
		],
		[
			"server code in a component",
			{ "app/components/a.tsx": `import { env } from "#app/lib/env.server.ts";` },
			"app/components/a.tsx imports app/lib/env.server.ts: a browser",
		],
		[
			"server code in a part of a route",
			{ "app/routes/desk/parts/a.tsx": `await import("#app/jobs/queue.server.ts");` },
			"app/routes/desk/parts/a.tsx imports app/jobs/queue.server.ts: a browser",
		],
		[
			"Node in what a browser is given",
			{ "app/lib/a.ts": `import { createHash } from "node:crypto";` },
			"app/lib/a.ts imports package:node:crypto: a browser",
		],
		[
			"a clock in an estimate",
			{ "app/estimate/a.ts": `export const now = () => Date.now();` },
			"app/estimate/a.ts uses Date.now",
		],
		[
			"today's date in protection",
			{ "app/protect/a.ts": `export const now = () => new Date();` },
			"app/protect/a.ts uses new Date()",
		],
		[
			"chance in protection",
			{ "app/protect/a.ts": `export const pick = () => Math.random();` },
			"app/protect/a.ts uses Math.random",
		],
		[
			"React in an estimate",
			{ "app/estimate/a.ts": `import { useMemo } from "react";` },
			"app/estimate/a.ts imports package:react",
		],
		[
			"a query in an estimate",
			{ "app/protect/a.ts": `import { shares } from "./shares.server.ts";` },
			"app/protect/a.ts imports app/protect/shares.server.ts: not pure",
		],
		[
			"a clock two files behind an estimate",
			{
				"app/estimate/a.ts": `export * from "#app/lib/b.ts";`,
				"app/lib/b.ts": `import { c } from "./c.ts";`,
				"app/lib/c.ts": `export const c = () => performance.now();`,
			},
			"app/estimate/a.ts -> app/lib/b.ts -> app/lib/c.ts uses performance.now",
		],
		[
			"a public page opening a transaction",
			{ "app/routes/public/a.tsx": `import { scopedTransaction } from "#app/auth/scope.server.ts";` },
			"app/routes/public/a.tsx -> app/auth/scope.server.ts: past the reader",
		],
		[
			"a data-room page asking as an associate",
			{ "app/routes/dataroom/a.tsx": `import { requireAssociate } from "#app/auth/guard.server.ts";` },
			"app/routes/dataroom/a.tsx takes requireAssociate",
		],
		[
			"published figures taking a transaction",
			{ "app/publish/a.server.ts": `import type { Trx } from "#app/auth/scope.server.ts";` },
			"app/publish/a.server.ts imports types of app/auth/scope.server.ts",
		],
		[
			"a public page reading drafts",
			{ "app/routes/public/a.tsx": `import { r } from "#app/publish/drafting/reports.server.ts";` },
			"app/routes/public/a.tsx -> app/publish/drafting/reports.server.ts: past the reader",
		],
		[
			"a public page reaching answers by way of a component and of published figures",
			{
				"app/routes/public/a.tsx": `import { B } from "#app/components/b.tsx";`,
				"app/components/b.tsx": `export { c } from "#app/publish/c.ts";`,
				"app/publish/c.ts": `import { answers } from "#app/collect/answers.server.ts";`,
			},
			"app/routes/public/a.tsx -> app/components/b.tsx -> app/publish/c.ts -> app/collect/answers.server.ts: past the reader",
		],
	])("finds %s", (_kind, added, finding) => {
		expect(findingsWith(added)).toContainEqual(expect.stringContaining(finding));
	});

	test("refuses an import whose module is not written out", () => {
		expect(() => parseModule("app/lib/a.ts", "await import(name);")).toThrow("cannot be checked");
	});

	test("lists an exception that nobody makes use of", () => {
		expect(idleExceptions(new Map())).toContain("app/publish/reader.server.ts -> db/connect.ts");
	});
});

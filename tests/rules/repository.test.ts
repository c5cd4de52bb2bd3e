import { execFileSync } from "node:child_process";
import { readFileSync } from "node:fs";
import { join } from "node:path";
import { describe, expect, test } from "vitest";
import { type Sources, unguarded } from "./guards.ts";

const root = join(import.meta.dirname, "../..");
const read = (file: string) => readFileSync(join(root, file), "utf8");
const files = execFileSync("git", ["ls-files", "-co", "--exclude-standard"], { cwd: root })
	.toString()
	.split("\n")
	.filter((file) => file !== "");
const isCode = (file: string) => /\.(ts|tsx|mts|mjs|css)$/.test(file);

test("the top level holds what contributors expect there and nothing else", () => {
	const folders = ["app", "db", "fakes", "locales", "public", "tests"];
	const own = ["package.json", "package-lock.json", "tsconfig.json", "vite.config.ts", "react-router.config.ts"];
	const told = ["README.md", "DEVELOPERS.md"];
	const top = [...new Set(files.map((file) => file.split("/")[0]!))].filter((name) => !name.startsWith("."));
	expect(top.toSorted()).toEqual([...folders, ...own, ...told].toSorted());
});

test("every file of the app is short enough to hold one subject", () => {
	const sources = files.filter((file) => /^app\/.*\.tsx?$/.test(file) && !/\.test\.tsx?$/.test(file));
	expect(sources.filter((file) => read(file).split("\n").length > 300)).toEqual([]);
});

test("no test is left out, and none keeps the others from running", () => {
	const tests = files.filter((file) => /\.test\.tsx?$/.test(file));
	expect(tests.length).toBeGreaterThan(30);
	const leftOut = /\b(test|it|describe|suite)(\.\w+)*\.(skip|skipIf|only|todo|fails)\b|\b[xf](it|describe|test)\(/;
	expect(tests.filter((file) => leftOut.test(read(file)))).toEqual([]);
});

type Package = { dependencies: Record<string, string>; devDependencies: Record<string, string> };
const { dependencies, devDependencies } = JSON.parse(read("package.json")) as Package;

/** Packages that no file of ours imports, and why they are there. */
const notImported: Record<string, string> = {
	"@types/node": "types of Node itself",
	"axe-core": "what @axe-core/playwright runs",
	oxlint: "run by npm run lint",
	prettier: "run by npm run format",
	"typescript-7": "run by npm run types",
};

describe("packages", () => {
	test("every version is exact", () => {
		const versions = Object.entries({ ...dependencies, ...devDependencies });
		expect(versions.filter(([, version]) => !/^(npm:typescript@)?\d+\.\d+\.\d+(-[\w.]+)?$/.test(version))).toEqual([]);
	});

	test("every package is imported, or named with a reason", () => {
		const shipped = files.filter((file) => /^(app|db)\//.test(file) && isCode(file)).map(read);
		const all = files.filter((file) => isCode(file) && !file.startsWith("tests/rules/repository")).map(read);
		const unused = [
			...Object.keys(dependencies).filter((name) => !isImported(name, shipped)),
			...Object.keys(devDependencies).filter((name) => !isImported(name.replace(/^@types\//, ""), all)),
		];
		expect(unused.toSorted()).toEqual(Object.keys(notImported).toSorted());
	});

	test("the lock file names no registry but the public one", () => {
		const lock = JSON.parse(read("package-lock.json")) as { packages: Record<string, { resolved?: string }> };
		const resolved = Object.values(lock.packages).flatMap((one) => one.resolved ?? []);
		expect(resolved.filter((address) => !address.startsWith("https://registry.npmjs.org/"))).toEqual([]);
		const fromLock = JSON.stringify(lock.packages[""]);
		expect(JSON.parse(fromLock)).toMatchObject({ dependencies, devDependencies });
	});
});

/** Named as a module, one of its modules, or a program of it: "pg", "zod/v4", "node_modules/x/bin.js". */
function isImported(name: string, texts: string[]): boolean {
	const exact = name.replaceAll(/[/.]/g, String.raw`\$&`);
	const named = new RegExp(`["'\`](?:[./]*node_modules/)?${exact}(?:/[^"'\`]*)?["'\`]`);
	return texts.some((text) => named.test(text));
}

/** Who must be asked for in each area; routes of `public` and `api` are anybody's, those of `subscriber` a token's. */
const guards: Record<string, string[]> = {
	desk: ["requireAssociate"],
	network: ["requireCoordinator"],
	dataroom: ["requirePerson", "requireResearcher"],
	grower: ["requireGrower", "requireOrchard"],
};
const asksNobody: Record<string, string> = {
	"app/routes/grower/layout.tsx": "the frame of the grower's pages, which shows nothing of anybody",
	"app/routes/grower/offline.tsx": "the page that a phone draws its own survey in, and that shows nothing of anybody",
	"app/routes/grower/worker.ts": "the service worker's script, the same for everybody",
	"app/routes/grower/link.tsx": "a personal link's own token says who asks",
	"app/routes/grower/check-answer.tsx": "a question's own token says who is asked",
	"app/routes/grower/stop-mail.tsx": "a token out of a mail says whose mail is to stop",
};

const areaOf = (file: string) => file.split("/")[2]!;

describe("routes", () => {
	const routes = files.filter((file) => /^app\/routes\/\w+\/[^/]+\.tsx?$/.test(file));
	const sources: Sources = new Map(
		files.filter((file) => file.startsWith("app/routes/")).map((file) => [file, read(file)]),
	);

	test("every loader and action of a guarded area first asks who is there", () => {
		expect(new Set(routes.map(areaOf))).toEqual(new Set(["api", "public", "subscriber", ...Object.keys(guards)]));
		const guarded = routes.filter((file) => guards[areaOf(file)] && !(file in asksNobody));
		expect(guarded.length).toBeGreaterThan(25);
		expect(guarded.flatMap((file) => unguarded(file, sources, guards[areaOf(file)]!))).toEqual([]);
	});

	test("a page that can answer with a conflict looks again at what stands, unless it is drawn anew anyway", () => {
		const conflicts = [...sources].filter(
			([file, text]) => routes.includes(file) && file.endsWith(".tsx") && /\b409\b/.test(text),
		);
		expect(conflicts.length).toBeGreaterThan(15);
		const stale = conflicts.filter(
			([, text]) =>
				!text.includes("handle = { bare: true }") && !/export (const|function) shouldRevalidate\b/.test(text),
		);
		expect(stale.map(([file]) => file)).toEqual([]);
	});

	test("every route that asks nobody is there, and does", () => {
		const without = Object.keys(asksNobody).filter(
			(file) => unguarded(file, sources, guards[areaOf(file)]!).length > 0,
		);
		expect(without).toEqual(Object.keys(asksNobody));
	});

	test.each([
		[`export async function loader({ context }) { return listAll(context); }`, ["loader does not begin"]],
		[
			`export function loader({ context }) { const all = read(); requireAssociate(context); }`,
			["loader does not begin"],
		],
		[`export const loader = ({ context }) => requireCoordinator(context);`, ["loader does not begin"]],
		[
			`export function loader({ context }) { requireAssociate(context); } export function action() { write(); }`,
			["action does not begin"],
		],
		[`export default function Page() { return null; }`, ["a page without a loader"]],
		[
			`export function loader({ context }) { const desk = requireAssociate(context); } export default function Page() {}`,
			[],
		],
		[
			`import { open } from "./parts/open.server.ts"; export async function loader(args) { const all = await open(args); }`,
			[],
		],
		[
			`import { shut } from "./parts/open.server.ts"; export async function loader(args) { const all = await shut(args); }`,
			["loader does not begin"],
		],
	])("a desk route is judged by what it asks first: %s", (text, findings) => {
		const parts = `export function open({ context }) { return requireAssociate(context); } export function shut() { return 1; }`;
		const made: Sources = new Map([
			["app/routes/desk/a.tsx", text],
			["app/routes/desk/parts/open.server.ts", parts],
		]);
		expect(unguarded("app/routes/desk/a.tsx", made, guards.desk!)).toEqual(
			findings.map((finding) => expect.stringContaining(finding)),
		);
	});
});

// npm test: static checks, build and all tests, on a throw-away cluster. Ends with the line "N passed, N failed".
import { rmSync } from "node:fs";
import { join } from "node:path";
import { ensureBuild } from "./build.mjs";
import { ensureChromium, ensurePdfReader } from "./chromium.mjs";
import { startCluster, stopCluster } from "./cluster.mjs";
import { atEnd, end, endOnSignals } from "./end.mjs";
import { local, makeLocal, readJson, root } from "./local.mjs";
import { checkNode, ensurePackages } from "./packages.mjs";
import { databaseUrl, ensureRoles, roles } from "./roles.mjs";
import { run } from "./run.mjs";
import { step, Stop, tell } from "./steps.mjs";
import { addCounts, countResults, summary } from "./test-counts.mjs";

const extra = process.argv.slice(2);
/** Side by side: the browser's tests wait a good part of their time, and the others fill it. */
const parts = extra.length
	? [{ title: "Tests", args: extra }]
	: [
			{ title: "Tests of code and database", args: ["--project", "unit", "--project", "database"] },
			{ title: "Tests in the browser", args: ["--project", "browser"] },
		];

// Set by those who run the product against real services; no test may reach those.
const kept = ([name]) =>
	!/^(DATABASE_|OAUTH_|SMTP_|MAIL_|PG)/.test(name) &&
	![
		"DEMO",
		"BASE_URL",
		"INBOX_URL",
		"SESSION_SECRET",
		"PORT",
		"HOST",
		"NODE_ENV",
		"CODE_VERSION",
		"COORDINATOR_SUBJECT",
		"DATA_LICENSE_URL",
		"PHOTO_DIR",
	].includes(name);
const cleanEnvironment = Object.fromEntries(Object.entries(process.env).filter(kept));

/** One check that passes or fails as a whole. */
async function check(title, work) {
	try {
		await step(title, work, { streams: true });
		return { passed: 1, failed: 0, skipped: 0 };
	} catch (error) {
		tell(error);
		return { passed: 0, failed: 1, skipped: 0 };
	}
}

const npmScript = (name) => () =>
	run("npm", ["run", "--silent", name], { streams: true, mayFail: true, env: cleanEnvironment }).then(({ code }) => {
		if (code !== 0) throw new Stop(`npm run ${name} ended with code ${code}`);
		return "passed";
	});

async function prepare() {
	await step("npm packages", ensurePackages);
	let chromium;
	await step("Chromium", async () => (chromium = await ensureChromium()));
	await step("Reader of PDF files", ensurePdfReader);
	let cluster;
	await step("Database cluster for the tests", async () => {
		cluster = await startCluster({ name: "test", throwaway: true });
		atEnd(() => stopCluster(cluster));
		await ensureRoles(cluster);
		return `PostgreSQL ${cluster.version} on 127.0.0.1:${cluster.port}`;
	});
	return {
		...cleanEnvironment,
		CHROMIUM_PATH: chromium,
		TEST_DATABASE_ADMIN_URL: databaseUrl(cluster, "admin", "postgres"),
		// The tests put the name of a database of their own at the end of these.
		...Object.fromEntries(
			Object.keys(roles).flatMap((key) => [
				[`TEST_${key.toUpperCase()}_URL`, databaseUrl(cluster, key, "postgres")],
				[`TEST_${key.toUpperCase()}_PASSWORD`, cluster.passwords[key]],
			]),
		),
	};
}

async function runTests(env, { title, args: chosen }, index) {
	const results = join(local, `test-results-${index}.json`);
	rmSync(results, { force: true });
	let code;
	await step(
		title,
		async () => {
			const reporters = ["--reporter=default", "--reporter=json", `--outputFile.json=${results}`];
			const args = ["node_modules/vitest/vitest.mjs", "run", ...reporters, ...chosen];
			({ code } = await run(process.execPath, args, { env, streams: true, mayFail: true, sweeps: true }));
			return code === 0 ? "passed" : "failed";
		},
		{ streams: true },
	);
	return countResults(readJson(results, undefined), code, root);
}

async function testAll() {
	const env = await prepare();
	const counts = [];
	// With arguments for the test runner, somebody wants certain tests only.
	const build = await check("Build", ensureBuild);
	if (!extra.length || build.failed) counts.push(build);
	const running = parts.map((part, index) => runTests(env, part, index));
	if (extra.length) console.log("\nOnly the tests asked for: types, lint and format are left out.");
	else {
		counts.push(await check("Types", npmScript("types")));
		counts.push(await check("Lint", npmScript("lint")));
		counts.push(await check("Format", npmScript("format:check")));
	}
	const tests = addCounts(await Promise.all(running));
	if (tests.passed + tests.failed === 0) {
		console.error("No test was run, which counts as a failure.");
		tests.failed = 1;
	}
	return addCounts([...counts, tests]);
}

try {
	endOnSignals((signal) => console.log(`\nStopping (${signal}) ...`));
	checkNode();
	makeLocal();
	const total = await testAll();
	// The counts come last of all, for whoever reads only the end.
	await end(total.failed ? 1 : 0, () => console.log(`\n${summary(total)}`));
} catch (error) {
	tell(error);
	await end(1, () => console.log("\n0 passed, 1 failed"));
}

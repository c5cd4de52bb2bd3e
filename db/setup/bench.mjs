// npm run bench: measures on a throw-away cluster, or on the one that TEST_... addresses name. JSON lines on stdout.
import { ensureBuild } from "./build.mjs";
import { ensureChromium } from "./chromium.mjs";
import { startCluster, stopCluster } from "./cluster.mjs";
import { atEnd, end, endOnSignals } from "./end.mjs";
import { makeLocal } from "./local.mjs";
import { checkNode, ensurePackages } from "./packages.mjs";
import { databaseUrl, ensureRoles, roles } from "./roles.mjs";
import { run } from "./run.mjs";
import { tell } from "./steps.mjs";

async function addresses() {
	if (process.env.TEST_DATABASE_ADMIN_URL) return {};
	const cluster = await startCluster({ name: "bench", throwaway: true });
	atEnd(() => stopCluster(cluster));
	await ensureRoles(cluster);
	return {
		TEST_DATABASE_ADMIN_URL: databaseUrl(cluster, "admin", "postgres"),
		...Object.fromEntries(
			Object.keys(roles).map((key) => [`TEST_${key.toUpperCase()}_URL`, databaseUrl(cluster, key, "postgres")]),
		),
	};
}

try {
	endOnSignals();
	checkNode();
	makeLocal();
	await ensurePackages();
	const wanted = process.argv.slice(2);
	// Pages and the map are measured in a browser.
	const parts = wanted.filter((word) => !word.startsWith("-"));
	const looks = parts.length === 0 || ["pages", "map"].some((part) => parts.includes(part));
	// Only these ask nothing of the built product.
	if (parts.length === 0 || parts.some((part) => !["tally", "submission"].includes(part))) await ensureBuild();
	const browser = looks ? { CHROMIUM_PATH: await ensureChromium() } : {};
	const env = { ...process.env, ...browser, ...(await addresses()) };
	const args = ["--import", "tsx", "tests/bench/bench.ts", ...wanted];
	const { code } = await run(process.execPath, args, { env, streams: true, mayFail: true });
	await end(code);
} catch (error) {
	tell(error);
	await end(1);
}

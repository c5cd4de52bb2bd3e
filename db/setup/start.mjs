// npm start and npm run dev: everything a fresh machine needs, then the product until it is stopped.
import { startAll } from "./all.mjs";
import { migrate, preparePrivateDatabase, stopDatabase, writeEnvironmentFile } from "./database.mjs";
import { end, endOnSignals } from "./end.mjs";
import { makeLocal } from "./local.mjs";
import { checkNode, ensurePackages } from "./packages.mjs";
import { step, tell } from "./steps.mjs";

const options = new Set(process.argv.slice(2));
const known = ["--dev", "--database-only", "--stop-database"];

/** For work on the code by hand: the database alone, which then stays up. */
async function databaseOnly() {
	await step("npm packages", ensurePackages);
	const { addresses } = await preparePrivateDatabase({ stays: true });
	await migrate({ ...process.env, ...addresses });
	console.log(`\nThe database stays up. Its addresses: ${writeEnvironmentFile(addresses)}`);
	await end(0);
}

try {
	endOnSignals((signal) => console.log(`\nStopping (${signal}) ...`));
	checkNode();
	makeLocal();
	const wrong = [...options].filter((option) => !known.includes(option));
	if (wrong.length) {
		console.error(`Unknown: ${wrong.join(" ")}. Known: ${known.join(" ")}`);
		await end(2);
	}
	if (options.has("--stop-database")) {
		await step("Stop the database", stopDatabase);
		await end(0);
	}
	await (options.has("--database-only") ? databaseOnly() : startAll({ dev: options.has("--dev") }));
} catch (error) {
	tell(error);
	await end(1);
}

import { migrate, preparePrivateDatabase, stopDatabase, writeEnvironmentFile } from "./database.mjs";
import { end, endOnSignals } from "./end.mjs";
import { makeLocal } from "./local.mjs";
import { checkNode, ensurePackages } from "./packages.mjs";
import { step, tell } from "./steps.mjs";

async function databaseOnly() {
	await step("npm packages", ensurePackages);
	const addresses = await preparePrivateDatabase({ stays: true });
	await migrate({ ...process.env, ...addresses });
	console.log(`\nThe database stays up. Its addresses: ${writeEnvironmentFile(addresses)}`);
}

try {
	endOnSignals();
	checkNode();
	makeLocal();
	if (process.argv.includes("--stop-database")) await step("Stop the database", stopDatabase);
	else await databaseOnly();
	await end(0);
} catch (error) {
	tell(error);
	await end(1);
}

import { execFileSync } from "node:child_process";
import path from "node:path";
import { fileURLToPath } from "node:url";

/** Writes the types of a migrated database to `outFile`. A test compares them with db/schema.ts, since what is kept twice drifts. */
export function generateSchemaTypes(ownerUrl: string, outFile: string): void {
	const bin = fileURLToPath(new URL("../node_modules/kysely-codegen/dist/cli/bin.js", import.meta.url));
	execFileSync(
		process.execPath,
		[
			bin,
			"--url",
			ownerUrl,
			"--dialect",
			"postgres",
			"--out-file",
			outFile,
			"--include-pattern",
			"(directory|collect|release|publish|readership|auth|log).*",
			"--default-schema",
			"none",
			"--numeric-parser",
			"number",
			"--date-parser",
			"string",
			"--type-mapping",
			JSON.stringify({ int8: "number" }),
			"--log-level",
			"error",
		],
		{ stdio: "inherit" },
	);
}

if (process.argv[1] === fileURLToPath(import.meta.url)) {
	if (!process.env.DATABASE_OWNER_URL) throw new Error("DATABASE_OWNER_URL must be set");
	generateSchemaTypes(process.env.DATABASE_OWNER_URL, path.join(import.meta.dirname, "schema.ts"));
}

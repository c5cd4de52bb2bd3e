// The production build, made anew only when what goes into it changed.
import { createHash } from "node:crypto";
import { existsSync, readdirSync, readFileSync, statSync, writeFileSync } from "node:fs";
import { join, relative } from "node:path";
import { root } from "./local.mjs";
import { run } from "./run.mjs";

const folders = ["app", "locales", "public", "db", "fakes"];
const files = ["package.json", "package-lock.json", "vite.config.ts", "react-router.config.ts", "tsconfig.json"];
// None of it goes into the build, but what says how the programs are built.
const leftOut = /^db\/setup\/(?!build-programs)|\.test\.tsx?$/;

function listFiles(path) {
	if (!existsSync(path) || leftOut.test(relative(root, path))) return [];
	if (!statSync(path).isDirectory()) return [path];
	return readdirSync(path)
		.toSorted()
		.flatMap((name) => listFiles(join(path, name)));
}

/** One hash over all files in these folders and files. */
export function hashFiles(paths) {
	const hash = createHash("sha256");
	for (const file of paths.flatMap((path) => listFiles(join(root, path)))) {
		hash.update(`${relative(root, file)}\0`).update(createHash("sha256").update(readFileSync(file)).digest());
	}
	return hash.digest("hex");
}

export async function ensureBuild() {
	const stamp = join(root, "build/.stamp");
	const hash = hashFiles([...folders, ...files]);
	if (existsSync(stamp) && readFileSync(stamp, "utf8") === hash) return "up to date";
	const env = { ...process.env, NODE_ENV: "production" };
	await run(process.execPath, ["node_modules/@react-router/dev/bin.js", "build"], { env });
	await run(process.execPath, ["db/setup/build-programs.mjs"], { env });
	writeFileSync(stamp, hash);
	return "built";
}

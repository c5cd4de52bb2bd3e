// npm run bench -- [PART ...] [--sizes=10000,100000] [--runs=7]: measures and prints JSON lines.
import { spawnSync } from "node:child_process";
import { loadavg } from "node:os";
import { parseArgs } from "node:util";
import type { Bench, Line } from "./line.ts";
import { parts } from "./parts.ts";

const { values, positionals } = parseArgs({
	allowPositionals: true,
	options: {
		sizes: { type: "string", default: "10000,100000,1000000,2000000" },
		runs: { type: "string", default: "7" },
	},
});

const tidy = (number: number | null) => (number === null ? null : Number(number.toPrecision(4)));

function printLine({
	name,
	value,
	unit,
	floor = null,
	ratio = floor === null ? null : value / floor,
	goal,
}: Line): void {
	const line = { name, value: tidy(value), unit, floor: tidy(floor), ratio: tidy(ratio), ...(goal && { goal }) };
	process.stdout.write(`${JSON.stringify(line)}\n`);
}

const print = (...lines: Line[]) => lines.forEach(printLine);
const bench: Bench = {
	print,
	sizes: values.sizes.split(",").map(Number),
	runs: Number(values.runs),
};
const wanted = positionals.length > 0 ? positionals : Object.keys(parts);
const unknown = wanted.filter((name) => !(name in parts));
if (unknown.length > 0 || ![...bench.sizes, bench.runs].every((size) => Number.isInteger(size) && size > 0)) {
	console.error(`Usage: npm run bench -- [${Object.keys(parts).join("|")} ...] [--sizes=10000,100000] [--runs=7]`);
	process.exit(1);
}
if (wanted.length === 1) {
	print({ name: "machine load at the beginning", value: loadavg()[0]!, unit: "1 min average" });
	const measure = await parts[wanted[0]!]!();
	await measure(bench);
	print({ name: "machine load at the end", value: loadavg()[0]!, unit: "1 min average" });
}
// Each of several in a process of its own: they work on databases of their own, and one's memory is not another's.
else {
	const options = process.argv.slice(2).filter((word) => word.startsWith("-"));
	const failed = wanted.filter((name) => {
		const args = [...process.execArgv, process.argv[1]!, name, ...options];
		return spawnSync(process.execPath, args, { stdio: "inherit" }).status !== 0;
	});
	if (failed.length > 0) throw new Error(`not measured: ${failed.join(", ")}`);
}

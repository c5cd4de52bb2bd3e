import { readFileSync } from "node:fs";
import { createRequire } from "node:module";
import type { UsTopology } from "./counties.ts";

let topology: UsTopology | undefined;

/**
 * The counties and states of the United States as shipped in the package us-atlas 3.0.1 (Census Bureau boundaries of
 * 2017, simplified to 1:10 million), read once a process. Server only: the file is 850 kB.
 */
export function usTopology(): UsTopology {
	const file = createRequire(import.meta.url).resolve("us-atlas/counties-10m.json");
	topology ??= JSON.parse(readFileSync(file, "utf8")) as UsTopology;
	return topology;
}

import { mkdtemp, readFile, rm, writeFile } from "node:fs/promises";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { expect, test } from "vitest";
import { checkers } from "./verify/phenology-counties.ts";

const folder = join(import.meta.dirname, "data/phenology");

async function check(name: string, path = join(folder, name)) {
	const checker = checkers.find(({ file }) => file.test(name));
	const result = await checker?.check(path, folder);
	if (!result || result === "not_covered") throw new Error(`${name} is not covered`);
	return result;
}

/** Values in each file; what each comes from is told in data/phenology/SOURCES.md. */
test.each([
	{ name: "county_state_counts.csv", values: 74 },
	{ name: "county_pairs.csv", values: 16 },
	{ name: "county_neighbors.csv", values: 40 },
	{ name: "points_in_county.csv", values: 42 },
	{ name: "county_area_check.csv", values: 40 },
])("$name agrees in all of its $values values", async ({ name, values }) => {
	expect(await check(name)).toMatchObject({ passed: true, values });
});

/** A check that cannot fail shows nothing: each file with one value changed must be refused. */
test.each([
	["county_state_counts.csv", ",102,102,match", ",103,102,match"],
	["county_pairs.csv", "21073,21067,0,Franklin and Fayette KY do not touch,0", "21073,21067,0,-,1"],
	["county_neighbors.csv", "19015 19079", "19017 19079"],
	["points_in_county.csv", "42.0308,-93.6319,19169", "42.0308,-93.6319,19153"],
	["county_area_check.csv", "1482.097", "1482.297"],
])("%s with one wrong value fails", async (name, right, wrong) => {
	const text = await readFile(join(folder, name), "utf8");
	expect(text).toContain(right);
	const scratch = await mkdtemp(join(tmpdir(), "geography-"));
	try {
		await writeFile(join(scratch, name), text.replace(right, wrong));
		expect(await check(name, join(scratch, name))).toMatchObject({ passed: false });
	} finally {
		await rm(scratch, { recursive: true });
	}
});

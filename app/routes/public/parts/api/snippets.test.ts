import { execFileSync } from "node:child_process";
import { expect, test } from "vitest";
import { snippetOf } from "./snippets.ts";

const address = "https://example.org/api/v1/releases/1/cells?measure=it's&limit=2";

test("a shell takes the address as it stands, quotes and ampersands too", () => {
	const line = snippetOf("curl", address, { csv: true, fileName: null });
	// What the shell hands to the program, one argument a line.
	const told = execFileSync("sh", ["-c", line.replace(/^curl/, `printf '%s\\n'`)]).toString();
	expect(told.trimEnd().split("\n")).toEqual(["--fail", "--header", "Accept: text/csv", address]);
});

test.each(["r", "python"] as const)(
	"in %s a table is asked for as CSV and a file is saved under its name",
	(language) => {
		expect(snippetOf(language, address, { csv: true, fileName: null })).toContain("text/csv");
		const file = snippetOf(language, "https://example.org/cells.csv", { csv: false, fileName: "cells.csv" });
		expect(file).toContain(`"https://example.org/cells.csv", "cells.csv"`);
	},
);

test("in R no column is taken for numbers, so that a county's code keeps its zeros", () => {
	expect(snippetOf("r", address, { csv: true, fileName: null })).toContain('colClasses = "character"');
});

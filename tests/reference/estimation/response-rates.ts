import { readFile } from "node:fs/promises";
import { join } from "node:path";
import { responseRates } from "#app/estimate/response-rate.ts";
import type { Checked, Comparison } from "#tests/reference/checking.ts";

/** The table of worked numbers in a note on response rates: counts by outcome, then e and RR1 to RR6. */
export async function checkResponseRates(folder: string, file: string): Promise<Checked> {
	const lines = (await readFile(join(folder, file), "utf8")).split("\n").map(cellsOf);
	const head = lines.findIndex((cells) => cells[0] === "set" && cells.includes("RR6"));
	const names = lines[head] ?? [];
	const end = lines.findIndex((cells, i) => i > head && cells.length === 0);
	const sets = head < 0 ? [] : lines.slice(head + 2, end < 0 ? undefined : end);
	const comparisons = sets.flatMap((cells): Comparison[] => {
		// A count can be followed by its parts in brackets.
		const value = (name: string) => Number.parseFloat(cells[names.indexOf(name)] ?? "");
		const rates = responseRates({
			complete: value("I"),
			partial: value("P"),
			refused: value("R"),
			notContacted: value("NC"),
			otherwise: value("O"),
			unknown: value("U"),
			notEligible: value("NE"),
		});
		const { eligibleShare: e, rr1: RR1, rr2: RR2, rr3: RR3, rr4: RR4, rr5: RR5, rr6: RR6 } = rates;
		return Object.entries({ e, RR1, RR2, RR3, RR4, RR5, RR6 }).map(([name, actual]) => ({
			at: `set ${cells[0]} ${name}`,
			expected: value(name),
			actual,
		}));
	});
	return { comparisons, notCovered: 0 };
}

function cellsOf(line: string): string[] {
	return line.startsWith("|")
		? line
				.split("|")
				.slice(1, -1)
				.map((cell) => cell.trim())
		: [];
}

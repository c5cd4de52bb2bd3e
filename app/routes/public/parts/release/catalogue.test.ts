import { expect, test } from "vitest";
import { CatalogueQuery, fitsCatalogue } from "./catalogue.ts";

const entry = {
	number: 3,
	season: 2025,
	what: "current" as const,
	stateFips: ["19", "55"],
	text: "3 After harvest Después de la cosecha 2025 Iowa Wisconsin",
};
const query = (given: Record<string, string>) => CatalogueQuery.parse(given);

test.each<[Record<string, string>, boolean]>([
	[{}, true],
	[{ q: "COSECHA despues" }, true],
	[{ q: "harvest iowa" }, true],
	[{ q: "bloom" }, false],
	[{ season: "2025", state: "55", what: "current" }, true],
	[{ season: "2024" }, false],
	[{ state: "17" }, false],
	[{ what: "withdrawn" }, false],
	[{ season: "soon", state: "Iowa", what: "lost" }, true],
])("%j finds it: %s", (given, found) => {
	expect(fitsCatalogue(entry, query(given))).toBe(found);
});

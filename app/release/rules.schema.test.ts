import { expect, test } from "vitest";
import { parseForm } from "#app/lib/parse-form.ts";
import { formOf, RulesForm, rulesOf } from "./rules.schema.ts";

const typed = {
	minimumOwners: "5",
	dominancePercent: "10",
	largestOwners: "",
	largestPercent: "",
	publicFactor: "",
	steadyPercent: "15",
	carePercent: "30",
	steadyDays: "3",
	careDays: "7",
};

function parsed(changes: Partial<typeof typed>) {
	const form = new FormData();
	for (const [name, value] of Object.entries({ ...typed, ...changes })) form.set(name, value);
	return parseForm(RulesForm, form);
}
const problems = (changes: Partial<typeof typed>) => {
	const result = parsed(changes);
	return result.ok ? [] : result.problems.map(({ field, code }) => `${field} ${code}`);
};

test("settings go from the boxes to the rules and back", () => {
	const result = parsed({ largestOwners: "2", largestPercent: "75,5", publicFactor: "2.5" });
	expect(result.ok && rulesOf(result.value)).toEqual({
		minimumOwners: 5,
		dominancePercent: 10,
		largest: { owners: 2, percent: 75.5 },
		publicFactor: 2.5,
		steadyCv: 0.15,
		careCv: 0.3,
		steadyDays: 3,
		careDays: 7,
	});
	expect(result.ok && formOf(rulesOf(result.value))).toMatchObject({ steadyPercent: 15, largestOwners: 2 });
});

test.each([
	[{ minimumOwners: "2" }, "minimumOwners too_small_limit"],
	[{ minimumOwners: "4.5" }, "minimumOwners not_whole"],
	[{ minimumOwners: "" }, "minimumOwners not_a_number"],
	[{ dominancePercent: "many" }, "dominancePercent not_a_number"],
	[{ largestOwners: "2" }, "largestPercent empty"],
	[{ largestPercent: "70" }, "largestOwners empty"],
	[{ largestOwners: "5", largestPercent: "70" }, "largestOwners rules_largest_owners"],
	[{ publicFactor: "1.05" }, "publicFactor rules_public_factor"],
	[{ carePercent: "15" }, "carePercent rules_care"],
	[{ careDays: "2" }, "careDays rules_care"],
])("%o is refused beside its field", (changes, problem) => {
	expect(problems(changes)).toEqual([problem]);
});

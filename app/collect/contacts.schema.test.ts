import { describe, expect, test } from "vitest";
import { ContactForm, contactOutcomes, dispositionAfter } from "./contacts.schema.ts";
import type { Disposition } from "./frame-list.server.ts";

const after = (disposition: Disposition, outcome: (typeof contactOutcomes)[number], withdrawn = false) =>
	dispositionAfter({ disposition, withdrawn }, outcome);

describe("what a call comes to", () => {
	test.each<[Disposition, (typeof contactOutcomes)[number], Disposition]>([
		["not_reached", "reached", "reached"],
		["undeliverable", "call_back", "reached"],
		["not_reached", "refused", "refused"],
		["partial", "refused", "refused"],
		["reached", "not_eligible", "not_eligible"],
		// Said otherwise in another call, or noted by mistake.
		["refused", "reached", "reached"],
		["not_eligible", "reached", "reached"],
		// Begun answers tell more than that somebody was spoken to.
		["partial", "reached", "partial"],
	])("%s, then %s, is %s", (before, outcome, then) => {
		expect(after(before, outcome)).toBe(then);
	});

	test("nobody has been reached by a message, an unanswered call or a wrong number", () => {
		for (const outcome of ["message_left", "no_answer", "wrong_number"] as const)
			for (const before of ["not_reached", "undeliverable", "partial", "refused"] as const)
				expect(after(before, outcome)).toBe(before);
	});

	test("answers that were sent in stand, and so does taking them back", () => {
		for (const outcome of contactOutcomes) {
			expect(after("complete", outcome)).toBe("complete");
			expect(after("refused", outcome, true)).toBe("refused");
		}
	});
});

describe("a contact as typed", () => {
	const form = { way: "telephone", outcome: "no_answer" };
	const problemsOf = (more: Record<string, string>) =>
		ContactForm.safeParse({ ...form, ...more }).error?.issues.map(({ path, message }) => [path.join("."), message]);

	test("needs a day where it asks to be rung again, and where it names a time", () => {
		expect(problemsOf({})).toBeUndefined();
		expect(problemsOf({ outcome: "call_back" })).toEqual([["nextOn", "next_day_needed"]]);
		expect(problemsOf({ nextTime: "14:30" })).toEqual([["nextOn", "next_day_needed"]]);
		expect(problemsOf({ outcome: "call_back", nextOn: "2031-05-04", nextTime: "14:30" })).toBeUndefined();
	});

	test("refuses a time that no clock shows", () => {
		expect(problemsOf({ nextOn: "2031-05-04", nextTime: "24:00" })).toEqual([["nextTime", "time_wrong"]]);
	});
});

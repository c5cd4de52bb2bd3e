import { describe, expect, test } from "vitest";
import { closingNextSeason, momentIn, wallClockOf } from "./survey-closing.ts";

const zone = "America/Chicago";

// Offsets of US Central time are public law (15 U.S.C. 260a: second Sunday in March, first Sunday in November), from memory.
describe("a closing day and time in a zone", () => {
	test("is six hours behind UTC in winter and five in summer", () => {
		expect(momentIn("2026-12-24", "17:00", zone)?.toISOString()).toBe("2026-12-24T23:00:00.000Z");
		expect(momentIn("2026-07-01", "17:00", zone)?.toISOString()).toBe("2026-07-01T22:00:00.000Z");
	});

	test("moves forward by the hour that spring skips", () => {
		expect(momentIn("2026-03-08", "02:30", zone)?.toISOString()).toBe("2026-03-08T08:30:00.000Z");
		expect(wallClockOf(new Date("2026-03-08T08:30:00Z"), zone)).toEqual({ on: "2026-03-08", at: "03:30" });
	});

	test("takes the first of two equal clock times in autumn", () => {
		expect(momentIn("2026-11-01", "01:30", zone)?.toISOString()).toBe("2026-11-01T06:30:00.000Z");
	});

	test("does not exist on the thirtieth of February or at 25 o'clock", () => {
		expect(momentIn("2026-02-30", "12:00", zone)).toBeNull();
		expect(momentIn("2026-02-10", "25:00", zone)).toBeNull();
		expect(momentIn("tomorrow", "12:00", zone)).toBeNull();
	});

	test("comes back as it was typed", () => {
		const typed = { on: "2026-11-30", at: "09:05" };
		expect(wallClockOf(momentIn(typed.on, typed.at, zone)!, zone)).toEqual(typed);
	});
});

test("the closing of a copied survey keeps its day and time through summer time, leap days and years gone by", () => {
	const chicago = "America/Chicago";
	const next = (on: string, at: string, now: string) =>
		wallClockOf(closingNextSeason(momentIn(on, at, chicago)!, chicago, new Date(now)), chicago);
	expect(next("2026-06-30", "17:00", "2026-12-02")).toEqual({ on: "2027-06-30", at: "17:00" });
	expect(next("2024-02-29", "08:00", "2024-03-01")).toEqual({ on: "2025-02-28", at: "08:00" });
	expect(next("2020-05-01", "17:00", "2026-05-01T12:00:00Z")).toEqual({ on: "2026-05-01", at: "17:00" });
	expect(next("2020-05-01", "17:00", "2026-05-02")).toEqual({ on: "2027-05-01", at: "17:00" });
});

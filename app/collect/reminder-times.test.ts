import { expect, test } from "vitest";
import { usualReminders } from "./reminder-times.ts";

const iowa = "America/Chicago";
const told = (times: Date[]) => times.map((time) => time.toISOString());

test("reminders go at nine in the morning after a third and two thirds of the time", () => {
	const times = usualReminders(new Date("2026-06-01T14:00:00Z"), new Date("2026-07-01T22:00:00Z"), iowa);
	expect(told(times)).toEqual(["2026-06-11T14:00:00.000Z", "2026-06-21T14:00:00.000Z"]);
});

test("nine stays nine across the end of summer time, and in another zone", () => {
	const opened = new Date("2026-10-20T14:00:00Z");
	const closes = new Date("2026-11-19T23:00:00Z");
	expect(told(usualReminders(opened, closes, iowa))).toEqual(["2026-10-30T14:00:00.000Z", "2026-11-09T15:00:00.000Z"]);
	expect(told(usualReminders(opened, closes, "America/New_York"))[0]).toBe("2026-10-30T13:00:00.000Z");
});

test("a survey of two days is reminded within it, in order, at whole quarters of an hour", () => {
	const opened = new Date("2026-04-10T13:07:00Z");
	const closes = new Date("2026-04-12T13:07:00Z");
	expect(told(usualReminders(opened, closes, iowa))).toEqual(["2026-04-11T05:15:00.000Z", "2026-04-11T21:15:00.000Z"]);
});

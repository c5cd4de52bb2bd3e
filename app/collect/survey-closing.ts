import type { Problem } from "#app/lib/parse-form.ts";
import type { ClosingForm } from "./survey-draft.schema.ts";

const day = /^(\d{4})-(\d{2})-(\d{2})$/;
const clock = /^(\d{1,2}):(\d{2})$/;

/**
 * The moment that a calendar day and a clock time name in a time zone.
 * @param on `2026-12-24`. @param at `17:00`. @param timeZone an IANA name.
 * @returns null when day or time do not exist in the calendar. A time that the change to summer time skips is moved
 *   forward by the hour skipped; one that comes twice in autumn is the first of the two.
 */
export function momentIn(on: string, at: string, timeZone: string): Date | null {
	const days = day.exec(on);
	const times = clock.exec(at);
	if (!days || !times) return null;
	const [year, month, date] = days.slice(1).map(Number) as [number, number, number];
	const [hour, minute] = times.slice(1).map(Number) as [number, number];
	const wall = Date.UTC(year, month - 1, date, hour, minute);
	const check = new Date(wall);
	if (hour > 23 || minute > 59 || check.getUTCMonth() !== month - 1 || check.getUTCDate() !== date) return null;
	// The zone's distance from UTC is taken a day before and a day after; of the two only one fits, both, or none.
	const before = wall - offsetAt(wall - 86_400_000, timeZone);
	const after = wall - offsetAt(wall + 86_400_000, timeZone);
	const fits = [before, after].filter((moment) => moment + offsetAt(moment, timeZone) === wall);
	return new Date(fits.length > 0 ? Math.min(...fits) : before);
}

/** A moment as the day and time that a clock in the zone shows, for the fields of a form. */
export function wallClockOf(moment: Date, timeZone: string): { on: string; at: string } {
	const wall = new Date(moment.getTime() + offsetAt(moment.getTime(), timeZone)).toISOString();
	return { on: wall.slice(0, 10), at: wall.slice(11, 16) };
}

/** The same day and time of a later year, the first that is still to come; the last of February where there is no 29th. */
export function closingNextSeason(closesAt: Date, timeZone: string, now: Date): Date {
	const { on, at } = wallClockOf(closesAt, timeZone);
	for (let year = Number(on.slice(0, 4)) + 1; ; year++) {
		const moment = momentIn(`${year}${on.slice(4)}`, at, timeZone) ?? momentIn(`${year}-02-28`, at, timeZone);
		if (moment && moment > now) return moment;
	}
}

/** Reads the fields of a closing time on a survey's clock, or says what to mend. */
export function readClosing(form: ClosingForm, timeZone: string, now: Date): { closesAt: Date } | { problem: Problem } {
	const closesAt = momentIn(form.closesOn, form.closesAt, timeZone);
	if (!closesAt) return { problem: { field: "closesOn", code: "date_wrong" } };
	if (closesAt <= now) return { problem: { field: "closesOn", code: "closing_past" } };
	if (closesAt.getTime() > now.getTime() + 2 * 366 * 86_400_000)
		return { problem: { field: "closesOn", code: "closing_far" } };
	return { closesAt };
}

/** What is added to UTC in a zone at a moment, in milliseconds. */
function offsetAt(moment: number, timeZone: string): number {
	const parts = new Intl.DateTimeFormat("en-US", {
		timeZone,
		hourCycle: "h23",
		year: "numeric",
		month: "numeric",
		day: "numeric",
		hour: "numeric",
		minute: "numeric",
		second: "numeric",
	}).formatToParts(moment);
	const of = (type: string) => Number(parts.find((part) => part.type === type)?.value);
	const wall = Date.UTC(of("year"), of("month") - 1, of("day"), of("hour"), of("minute"), of("second"));
	return wall - Math.floor(moment / 1000) * 1000;
}

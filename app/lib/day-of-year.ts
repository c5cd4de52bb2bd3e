/**
 * Days of the year as survey answers hold them: 1 is the first of January. After 28 February the same calendar date is one
 * day higher in a leap year: compare seasons by day or by date, say which, and never mix the two.
 */

const dayLength = 86_400_000;
const isoDate = /^(\d{4})-(\d{2})-(\d{2})$/;

/** 366 in leap years: those divisible by 4, but not by 100 unless by 400. */
export function daysInYear(year: number): 365 | 366 {
	return year % 4 === 0 && (year % 100 !== 0 || year % 400 === 0) ? 366 : 365;
}

/**
 * The calendar date of a day, as 2024-02-29.
 * @returns null for a day that the year does not have: 366 in a common year, and half days, which some medians are.
 * @throws {RangeError} for a year that is not a whole number from 1000 to 9999.
 */
export function dateOfDay(year: number, day: number): string | null {
	requireYear(year);
	if (!Number.isInteger(day) || day < 1 || day > daysInYear(year)) return null;
	return new Date(Date.UTC(year, 0, day)).toISOString().slice(0, 10);
}

/** The day of the year of a calendar date such as 2024-02-29. @returns null for a date that there is not. */
export function dayOfDate(date: string): number | null {
	const [, year, month, day] = (isoDate.exec(date) ?? []).map(Number);
	if (year === undefined || year < 1000) return null;
	const days = Math.round((Date.UTC(year, month! - 1, day) - Date.UTC(year, 0, 1)) / dayLength) + 1;
	// The 30th of February would read as a day in March.
	return dateOfDay(year, days) === date ? days : null;
}

function requireYear(year: number): void {
	if (!Number.isInteger(year) || year < 1000 || year > 9999) throw new RangeError(`${year} is not a year`);
}

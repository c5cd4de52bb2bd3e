import { dateOfDay, dayOfDate } from "#app/lib/day-of-year.ts";
import { readCsv, requiredNumber, type Checked } from "#tests/reference/checking.ts";

/** Days of common and leap years and their dates, there and back. A blank date is a day that the year does not have. */
export async function checkCalendar(folder: string, file: string): Promise<Checked> {
	const comparisons = (await readCsv(folder, file)).flatMap((row) => {
		const day = requiredNumber(row, "day_of_year");
		const date = dateOfDay(requiredNumber(row, "year"), day);
		const at = `${row.year} day ${day}`;
		const back = row.date ? [{ at: `${at} back`, expected: day, actual: dayOfDate(row.date) }] : [];
		return [{ at, expected: row.date ?? "", actual: date ?? "" }, ...back];
	});
	return { comparisons, notCovered: 0 };
}

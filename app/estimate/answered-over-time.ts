/** How many answered within a day, counted from the opening; trees or operations. */
export type DayAnswers = { day: number; answered: number };
/** The share, 0 to 1, that had answered by the end of a day. */
export type SharePoint = { day: number; share: number };

/**
 * The share of a frame that had answered by the end of each day of a survey. The base is the frame as it stands now, without
 * what was found not to belong: what grows with the days is the answers alone, so that the last point is RR1.
 * @param days answers by day, in any order; a day can come twice.
 * @param base operations or trees that may belong to the survey.
 * @param lastDay the last day to tell; answers that came after it, taken in late, are told with it.
 * @returns one point a day from 0 to the last, none where there is no base.
 * @throws {RangeError} for a base or last day below 0.
 */
export function sharesByDay(days: Iterable<DayAnswers>, base: number, lastDay: number): SharePoint[] {
	if (!(base >= 0) || !(lastDay >= 0)) throw new RangeError(`no shares of ${base} over ${lastDay} days`);
	if (base === 0) return [];
	const onDay = Array.from({ length: Math.floor(lastDay) + 1 }, () => 0);
	for (const { day, answered } of days) {
		const at = Math.min(Math.max(0, day), onDay.length - 1);
		onDay[at] = onDay[at]! + answered;
	}
	let sum = 0;
	return onDay.map((answered, day) => ({ day, share: (sum += answered) / base }));
}

/**
 * Days for a table of a curve: as even as whole days allow, the first and the last among them.
 * @param most how many at most, two or more.
 */
export function daysToTell(lastDay: number, most: number): number[] {
	const parts = Math.min(lastDay, most - 1);
	if (parts <= 0) return [0];
	return Array.from({ length: parts + 1 }, (_, i) => Math.round((i * lastDay) / parts));
}

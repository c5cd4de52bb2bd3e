import { momentIn, wallClockOf } from "./survey-closing.ts";

const hour = 3_600_000;
/** When mail is likely to be read, and somebody is at the desk to answer what it brings up. */
const morning = "09:00";

/**
 * When the two reminders of a survey go unless somebody sets other times: after a third and two thirds of the time it is
 * open, at nine in the morning of that day in its zone. In a survey of a few days, where that would be before the
 * opening, out of order or hard on the closing, at the very third, to the next quarter of an hour.
 */
export function usualReminders(openedAt: Date, closesAt: Date, timeZone: string): [Date, Date] {
	const length = closesAt.getTime() - openedAt.getTime();
	const thirds = [1, 2].map((third) => new Date(openedAt.getTime() + (length * third) / 3)) as [Date, Date];
	const mornings = thirds.map((at) => momentIn(wallClockOf(at, timeZone).on, morning, timeZone) ?? at) as [Date, Date];
	const apart = 12 * hour;
	const fits =
		mornings[0].getTime() - openedAt.getTime() >= apart &&
		mornings[1].getTime() - mornings[0].getTime() >= apart &&
		closesAt.getTime() - mornings[1].getTime() >= apart;
	return fits ? mornings : (thirds.map(toQuarter) as [Date, Date]);
}

function toQuarter(moment: Date): Date {
	return new Date(Math.ceil(moment.getTime() / (hour / 4)) * (hour / 4));
}

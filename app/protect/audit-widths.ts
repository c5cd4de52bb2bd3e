import type { Interval } from "./audit-system.ts";

/** How much room an unknown has on its tighter side, in multiples of what is asked there: 1 is just enough. */
export type Room = number;

export interface Widths {
	/** The tightest room; null when nothing is asked, or nothing bounds it. For an attacker who knows what is shown. */
	narrowest: number | null;
	/** How many intervals, one for each cell and quantity of which something is asked, have how much room. */
	widths: { under1: number; from1to2: number; from2to5: number; from5: number };
}

/** What rounding may take from a level, as a share of it. */
export const ROUNDING = 1e-6;

export function roomOf([lower, upper]: Interval, asked: { value: number; up: number; down: number }): Room {
	const { value, up, down } = asked;
	return Math.min(up > 0 ? (upper - value) / up : Infinity, down > 0 ? (value - lower) / down : Infinity);
}

export function widthsOf(rooms: readonly Room[]): Widths {
	const least = rooms.reduce((a, b) => Math.min(a, b), Infinity);
	const count = (from: number, to: number) => rooms.filter((room) => room >= from && room < to).length;
	const just = 1 - ROUNDING;
	return {
		narrowest: Number.isFinite(least) ? least : null,
		widths: {
			under1: count(-Infinity, just),
			from1to2: count(just, 2),
			from2to5: count(2, 5),
			from5: rooms.filter((room) => room >= 5).length,
		},
	};
}

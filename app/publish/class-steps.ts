import type { MeasureUnit } from "#app/lib/format.ts";

/** How classes are made: from the values themselves, or by steps that are the same whatever the values are. */
export const classWays = ["natural", "fixed"] as const;
export type ClassWay = (typeof classWays)[number];

/**
 * Fixed classes of one unit. `edges`: the same classes on every map, each from its edge up to just under the next, the last
 * edge included. `widths`: classes as wide as the first of these widths with which a map needs no more than five, counted
 * from `from`, so that edges are round numbers or weeks of the year.
 */
export type ClassSteps = { edges: readonly number[]; around?: number } | { widths: readonly number[]; from: number };

/** Round widths from a tenth to hundreds of millions, each about twice the one before. */
const roundWidths = Array.from({ length: 10 }, (_, power) => [1, 2, 5].map((step) => (step * 10 ** power) / 10)).flat();
const round: ClassSteps = { widths: roundWidths, from: 0 };

const steps: Partial<Record<MeasureUnit, ClassSteps>> = {
	percent: { edges: [0, 20, 40, 60, 80, 100] },
	// Below, about and above a normal crop: what lies near to normal has a class of its own in the middle.
	percent_of_normal: { edges: [0, 60, 85, 115, 140, 200], around: 100 },
	score: { edges: [0, 0.5, 1, 1.5, 2, 3] },
	// Weeks from January 1 on, or as many of them as it takes.
	day: { widths: [7, 14, 28, 56, 112], from: 1 },
};

export const stepsOfUnit = (unit: MeasureUnit): ClassSteps => steps[unit] ?? round;

/** Whether fixed classes of a unit lie on both sides of a middle, so that two hues tell them apart. */
export function haveMiddle(unit: MeasureUnit): boolean {
	const of = stepsOfUnit(unit);
	return "edges" in of && of.around !== undefined;
}

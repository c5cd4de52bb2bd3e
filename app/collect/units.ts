import type { Answer, Question } from "./form.ts";

/** What each family is kept in comes first; the others are what a grower may tell it in, as they are offered. */
const unitsOfFamily = {
	mass: ["lb", "bu", "half_bu", "peck", "dry_qt", "crate", "ton", "kg"],
	area: ["acre", "ha"],
	temperature: ["fahrenheit", "celsius"],
	length: ["ft", "m"],
} as const;
export type UnitFamily = keyof typeof unitsOfFamily;
export type Unit = (typeof unitsOfFamily)[UnitFamily][number];
export type MassUnit = (typeof unitsOfFamily)["mass"][number];

/** What the size of some units depends on: pounds in a bushel of the crop, and in one of the grower's own crates. */
export type UnitSizes = { bushelLb: number | null; crateLb: number | null };

/** The international pound and foot are exact since the agreement of 1959; an acre is 43,560 square feet (from memory). */
const kgPerLb = 0.45359237;
const meterPerFoot = 0.3048;
const acresPerHectare = 10_000 / (43_560 * meterPerFoot ** 2);
/** US customary dry measure: a bushel is 4 pecks or 32 dry quarts (from memory). */
const partsOfBushel = { bu: 1, half_bu: 2, peck: 4, dry_qt: 32 } as const;

/** The family of a question that may be answered in several units; undefined for counts and all other questions. */
export function unitFamilyOf(question: Question): UnitFamily | undefined {
	if (question.type !== "number" || question.unitFamily === "trees" || question.unitFamily === "count")
		return undefined;
	return question.unitFamily;
}

/** The unit in which a family's answers are kept. */
export function canonicalUnit(family: UnitFamily): Unit {
	return unitsOfFamily[family][0];
}

export function isMassUnit(value: unknown): value is MassUnit {
	return isUnitOf("mass", value);
}

export function isUnitOf(family: UnitFamily, value: unknown): value is Unit {
	return (unitsOfFamily[family] as readonly unknown[]).includes(value);
}

/** The units to offer: a bushel and its parts only for a crop that the trade has a bushel weight for. */
export function unitsFor(family: UnitFamily, bushelLb: number | null): Unit[] {
	return unitsOfFamily[family].filter((unit) => bushelLb !== null || !(unit in partsOfBushel));
}

/** The unit in which an answer was given, or the one it is kept in where that has lost its size, as a crop its bushel. */
export function unitGiven(given: Answer["given"], family: UnitFamily, bushelLb: number | null): Unit {
	const unit = unitsFor(family, bushelLb).find((offered) => offered === given?.unit);
	const isSized = unit !== "crate" || given?.crateLb !== undefined;
	return unit !== undefined && isSized ? unit : canonicalUnit(family);
}

/**
 * An amount in the unit that its family is kept in: pounds, acres, degrees Fahrenheit or feet. Nothing is rounded.
 * @throws {RangeError} for a unit whose size is not known here: `unitsFor` does not offer it, or its crate was not told.
 */
export function toCanonical(amount: number, unit: Unit, sizes: UnitSizes): number {
	return unit === "celsius" ? (amount * 9) / 5 + 32 : amount * sizeOf(unit, sizes);
}

/** The opposite of `toCanonical`. */
export function fromCanonical(value: number, unit: Unit, sizes: UnitSizes): number {
	return unit === "celsius" ? ((value - 32) * 5) / 9 : value / sizeOf(unit, sizes);
}

/** How much of its family's kept unit is in one of a unit. */
function sizeOf(unit: Exclude<Unit, "celsius">, { bushelLb, crateLb }: UnitSizes): number {
	switch (unit) {
		case "lb":
		case "acre":
		case "fahrenheit":
		case "ft":
			return 1;
		case "ton":
			return 2000;
		case "kg":
			return 1 / kgPerLb;
		case "ha":
			return acresPerHectare;
		case "m":
			return 1 / meterPerFoot;
		case "crate":
			if (crateLb === null) throw new RangeError("nobody told what one crate holds");
			return crateLb;
		default:
			if (bushelLb === null) throw new RangeError("this crop has no bushel weight");
			return bushelLb / partsOfBushel[unit];
	}
}

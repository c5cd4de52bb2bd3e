/** Units a grower may tell a crop's weight in. A ton is the short ton of 2,000 lb; a bushel depends on the crop. */
export const massUnits = ["lb", "bu", "ton", "kg"] as const;
export type MassUnit = (typeof massUnits)[number];

/** The international pound in kilograms, exact since the yard and pound agreement of 1959 (from memory). */
const kgPerLb = 0.45359237;

export function isMassUnit(value: unknown): value is MassUnit {
	return typeof value === "string" && (massUnits as readonly string[]).includes(value);
}

/** The units to offer for a crop: a bushel only where the trade has a weight for it. */
export function massUnitsFor(bushelLb: number | null): MassUnit[] {
	return massUnits.filter((unit) => unit !== "bu" || bushelLb !== null);
}

/**
 * Pounds in one unit of weight.
 * @param bushelLb pounds in a bushel of the crop, null where there is none.
 * @throws {RangeError} for bushels of a crop without a bushel weight: `massUnitsFor` does not offer them.
 */
export function poundsPer(unit: MassUnit, bushelLb: number | null): number {
	switch (unit) {
		case "lb":
			return 1;
		case "ton":
			return 2000;
		case "kg":
			return 1 / kgPerLb;
		case "bu":
			if (bushelLb === null) throw new RangeError("this crop has no bushel weight");
			return bushelLb;
	}
}

export function toPounds(amount: number, unit: MassUnit, bushelLb: number | null): number {
	return amount * poundsPer(unit, bushelLb);
}

export function fromPounds(pounds: number, unit: MassUnit, bushelLb: number | null): number {
	return pounds / poundsPer(unit, bushelLb);
}

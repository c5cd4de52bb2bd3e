/** What a reader can be told of one crop in one area. Withheld has one word, whatever the reason. */
export type CellStatus = "shown" | "withheld" | "no_growers";
export type Steadiness = "steady" | "care" | "rough";

export const areaKinds = ["county", "district", "state", "region"] as const;
export type AreaKind = (typeof areaKinds)[number];

/** A cell with how a map draws it: its class only where its number is shown. */
export type MapCell = Cell & { look: CellLook; classIndex: number | null };

/** One released figure with its area, in the measure's shown unit. Whatever is not shown has null for every number. */
export type Cell = {
	areaKey: string;
	areaName: string;
	kind: AreaKind;
	stateFips: string | null;
	status: CellStatus;
	value: number | null;
	lower: number | null;
	upper: number | null;
	/** Of a day of the year alone. */
	quartiles: { first: number; third: number } | null;
	steadiness: Steadiness | null;
	respondentsBand: string | null;
};
export type CropCell = Cell & { cropKey: string };

/** How a cell is drawn and told: a number, too rough for one, withheld, no growers with the crop, or no such figure. */
export type CellLook = "number" | "rough" | "withheld" | "no_growers" | "no_figure";

export function lookOf(cell: Pick<Cell, "status" | "value" | "steadiness">): CellLook {
	if (cell.status !== "shown") return cell.status;
	if (cell.steadiness === null) return "no_figure";
	return cell.value === null || cell.steadiness === "rough" ? "rough" : "number";
}

export const lookOrder: CellLook[] = ["number", "rough", "no_growers", "no_figure", "withheld"];
export type CellOrder = { key: "area" | "value"; direction: "asc" | "desc" };

/**
 * Cells in the order a table asks for. What has no number always comes after what has, by kind and then by name, so that a
 * withheld cell's place in a table sorted by value tells nothing about its value.
 */
export function orderCells<C extends Cell>(
	cells: C[],
	order: CellOrder,
	compare: (a: string, b: string) => number,
): C[] {
	const byName = (a: C, b: C) => compare(a.areaName, b.areaName) || compare(a.areaKey, b.areaKey);
	const turn = order.direction === "desc" ? -1 : 1;
	return cells.toSorted((a, b) => {
		if (order.key === "area") return turn * byName(a, b);
		const [lookA, lookB] = [lookOf(a), lookOf(b)];
		if (lookA !== lookB) return lookOrder.indexOf(lookA) - lookOrder.indexOf(lookB);
		return lookA === "number" ? turn * ((a.value ?? 0) - (b.value ?? 0)) || byName(a, b) : byName(a, b);
	});
}

import type { DraftCell } from "./draft.ts";

export type ReasonGroup = "own" | "shield" | "revision" | "other_survey" | "nobody_answered";
export type StatusCount = { kind: string; shown: number; withheld: number; noGrowers: number };

/**
 * Why a cell is withheld, as the desk is told: for its own sake, as a shield, since too few answers changed since an earlier
 * release, as another survey withholds the same, or as nobody answered.
 */
export function reasonGroup(cell: DraftCell): ReasonGroup | null {
	if (cell.status !== "withheld") return null;
	if (cell.reasons.includes("shield")) return "shield";
	if (cell.reasons.every((reason) => reason === "revision")) return "revision";
	if (cell.reasons.every((reason) => reason === "revision" || reason === "other_survey")) return "other_survey";
	return cell.reasons.includes("nobody_answered") ? "nobody_answered" : "own";
}

/** How many cells are shown and withheld at each level of area, widest first. */
export function countStatuses(cells: readonly DraftCell[], kindOf: ReadonlyMap<string, string>): StatusCount[] {
	return ["region", "state", "district", "county"].map((kind) => {
		const ofKind = cells.filter((cell) => kindOf.get(cell.areaKey) === kind);
		const count = (status: DraftCell["status"]) => ofKind.filter((cell) => cell.status === status).length;
		return { kind, shown: count("shown"), withheld: count("withheld"), noGrowers: count("no_growers") };
	});
}

import { type TableCatalogue, partOf } from "./catalogue.ts";
import { tableLimits } from "./limits.ts";
import type { TableSelection } from "./selection.ts";

/**
 * Addresses of the data API that together hold every cell of a table, release by release. Areas of a level are asked for by
 * level and state, those by name by their codes; where both are chosen that is two addresses, and a cell can be in both.
 */
export function apiAddresses(catalogue: TableCatalogue, selection: TableSelection): string[] {
	return selection.release.flatMap((release) => {
		const { measures, crops, areas } = partOf(catalogue, selection, release);
		if (measures.length === 0 || crops.length === 0 || areas.length === 0) return [];
		const states = selection.state.filter((state) => areas.some(({ stateFips }) => stateFips === state));
		// The whole network lies in no state, so a filter by states would take it away.
		const byLevel = selection.kind.filter((kind) => selection.state.length === 0 || kind !== "region");
		const named = areas.filter(
			({ key, kind }) => selection.area.includes(key) || (selection.kind.includes(kind) && !byLevel.includes(kind)),
		);
		const addressOf = (filters: Record<string, string[]>) => {
			const filled = Object.entries({ measure: measures, crop: crops, ...filters }).filter(
				([, codes]) => codes.length > 0,
			);
			const query = filled.map(([name, codes]) => `${name}=${codes.join(",")}`).join("&");
			return `/api/v1/releases/${release}/cells?${query}&limit=${tableLimits.cells}`;
		};
		return [
			...(byLevel.length > 0 && (selection.state.length === 0 || states.length > 0)
				? [addressOf({ kind: byLevel, state: states })]
				: []),
			...(named.length > 0 ? [addressOf({ area: named.map(({ key }) => key) })] : []),
		];
	});
}

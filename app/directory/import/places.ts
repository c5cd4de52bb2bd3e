import { nearestName, plainText } from "#app/lib/closeness.ts";
import type { Problem } from "#app/lib/parse-form.ts";

export type State = { stateFips: string; name: string; postal: string };
export type County = { countyFips: string; stateFips: string; name: string };
export type Places = { states: State[]; counties: County[]; granted: readonly string[] };
export type Place = { countyFips: string; stateFips: string };

/** Finds the county that a row means, among those of the granted states. What is misspelt is told with the nearest name. */
export function placeFinder({ states, counties, granted }: Places) {
	const stateOf = new Map(
		states.flatMap((state) => [state.name, state.postal, state.stateFips].map((word) => [plainText(word), state])),
	);
	const nameOf = (stateFips: string) => states.find((state) => state.stateFips === stateFips)?.name ?? stateFips;
	const byName = new Map<string, County[]>();
	for (const county of counties) {
		const key = plainText(county.name);
		byName.set(key, [...(byName.get(key) ?? []), county]);
	}

	return (countyTyped: string, stateTyped: string): Place | Problem => {
		// "Johnson, IA" and "Johnson County, Iowa" tell both; "county" is said in either language.
		const [first = "", second = ""] = countyTyped.split(",");
		const stateText = stateTyped || second;
		const state = stateOf.get(plainText(stateText));
		if (stateText.trim() !== "" && !state)
			return { field: "state", code: "state_unknown", detail: { typed: stateText.trim() } };
		if (state && !granted.includes(state.stateFips))
			return { field: "state", code: "state_not_granted", detail: { state: state.name } };
		if (/^\d{5}$/.test(first.trim())) return ofCode(first.trim());
		const key = plainText(first).replace(/^condado (de )?|\s(county|condado)$/g, "");
		const named = (byName.get(key) ?? []).filter((county) => !state || county.stateFips === state.stateFips);
		const mine = named.filter((county) => granted.includes(county.stateFips));
		if (mine.length === 1) return mine[0]!;
		if (mine.length > 1)
			return {
				field: "state",
				code: "county_several",
				detail: { states: mine.map((c) => nameOf(c.stateFips)).join(", ") },
			};
		if (named.length > 0)
			return { field: "county", code: "state_not_granted", detail: { state: nameOf(named[0]!.stateFips) } };
		const within = counties.filter((county) => (state ? [state.stateFips] : granted).includes(county.stateFips));
		const near = nearestName(
			key,
			within.map(({ name }) => name),
		);
		const typed = first.trim();
		return near
			? { field: "county", code: "county_near", detail: { typed, near } }
			: { field: "county", code: "county_unknown", detail: { typed } };
	};

	function ofCode(code: string): Place | Problem {
		const county = counties.find(({ countyFips }) => countyFips === code);
		if (!county) return { field: "county", code: "county_unknown", detail: { typed: code } };
		return granted.includes(county.stateFips)
			? county
			: { field: "county", code: "state_not_granted", detail: { state: nameOf(county.stateFips) } };
	}
}

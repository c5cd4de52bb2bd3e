type County = { countyFips: string; stateFips: string };
export type TestGrower = County & {
	number: number;
	language: "en" | "es";
	plantings: { cropKey: string; bearingTrees: number }[];
};

/** Bearing trees of one of each size class, twice, so that a stratum has two who can answer. */
const sizes = [60, 40, 450, 700, 2_400, 1_500];
/** In all, while each state has two. */
const handful = 6;

/**
 * The invented operations that a rehearsal asks: a handful, in every state of the survey, of different sizes, each with one
 * of its crops and every other with a second. Two of a state share a county, so that a county has a figure too.
 */
export function plannedTestGrowers(cropKeys: readonly string[], counties: readonly County[]): TestGrower[] {
	const states = [...new Set(counties.map(({ stateFips }) => stateFips))];
	const each = Math.max(2, Math.ceil(handful / Math.max(1, states.length)));
	return states.flatMap((stateFips, state) => {
		const ofState = counties.filter((county) => county.stateFips === stateFips);
		return Array.from({ length: each }, (_, at): TestGrower => {
			const number = state * each + at + 1;
			const trees = sizes[(number - 1) % sizes.length]!;
			const crops = [cropKeys[(number - 1) % cropKeys.length]!, cropKeys[number % cropKeys.length]!];
			const grown = number % 2 === 0 ? [...new Set(crops)] : crops.slice(0, 1);
			return {
				...ofState[Math.floor(at / 2) % ofState.length]!,
				number,
				language: number % 3 === 0 ? "es" : "en",
				plantings: grown.map((cropKey, second) => ({ cropKey, bearingTrees: second ? Math.ceil(trees / 3) : trees })),
			};
		});
	});
}

/** A level of area at which figures are told. */
export const plannedLevels = ["county", "district", "state", "region"] as const;
export type PlannedLevel = (typeof plannedLevels)[number];

/** One figure that a survey is to tell: of a measure and a crop, in every area of a level, with how good it must be. */
export type PlannedFigure = {
	measureKey: string;
	cropKey: string;
	level: PlannedLevel;
	/** The fewest operations that it is to rest on; null where any number will do. */
	smallestN: number | null;
	/** The largest coefficient of variation, as a share; null where any will do. A figure of days has none. */
	largestCv: number | null;
};

export type Brief = { why: string; askedBy: string; decision: string; planned: PlannedFigure[]; version: number };

/** A cell as a release's draft keeps it for the desk. */
export type ToldCell = {
	areaKey: string;
	cropKey: string;
	status: "shown" | "withheld" | "no_growers";
	respondents: number | null;
	figures: { measureKey: string; cv: number | null; value: number | null }[] | null;
};

/** How a plan came out: areas with growers of the crop, those of them that are told, and those told as well as planned. */
export type Kept = { areas: number; told: number; asPlanned: number };

/** Holds a planned figure against the cells of a release. `levelOf` gives the level of each area. */
export function holdAgainst(
	planned: PlannedFigure,
	cells: readonly ToldCell[],
	levelOf: ReadonlyMap<string, PlannedLevel>,
): Kept {
	const here = cells.filter(
		({ areaKey, cropKey, status }) =>
			cropKey === planned.cropKey && levelOf.get(areaKey) === planned.level && status !== "no_growers",
	);
	const told = here.flatMap(({ respondents, figures }) => {
		const figure = figures?.find(({ measureKey }) => measureKey === planned.measureKey);
		return figure && figure.value !== null ? [{ respondents, cv: figure.cv }] : [];
	});
	const asPlanned = told.filter(
		({ respondents, cv }) =>
			(planned.smallestN === null || (respondents ?? 0) >= planned.smallestN) &&
			(planned.largestCv === null || cv === null || cv <= planned.largestCv),
	);
	return { areas: here.length, told: told.length, asPlanned: asPlanned.length };
}

import type { Measure } from "#app/collect/form.ts";

/** The trees that the directory knows, over which shares are told; forms that do not ask for them count these. */
export const knownTrees: Extract<Measure["numerator"], { terms: unknown }> = {
	terms: [{ known: "bearing_trees", times: 1 }],
};

export const knownTreesBase: Measure = {
	key: "base.bearing_trees",
	kind: "total",
	label: { en: "Bearing trees or bushes", es: "Árboles o arbustos en producción" },
	description: { en: "Trees or bushes in bearing.", es: "Árboles o arbustos en producción." },
	unit: "trees",
	decimals: 0,
	worse: null,
	hue: "yield",
	numerator: knownTrees,
	denominator: null,
	scale: 1,
	acrossCrops: true,
	base: true,
};

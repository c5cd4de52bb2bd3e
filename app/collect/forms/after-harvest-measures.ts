import type { Measure } from "#app/collect/form.ts";

/** Asked once of the whole operation: a grower of several crops tells the first day of whichever came first. */
const harvestDays = [
	{
		key: "first_harvest",
		label: { en: "First day of harvest", es: "Primer día de cosecha" },
		description: {
			en: "The day by which half of the operations had begun to pick, whichever of their crops came first.",
			es: "El día en que la mitad de las fincas ya había empezado a cosechar, sin importar cuál de sus cultivos maduró primero.",
		},
	},
	{
		key: "last_harvest",
		label: { en: "Last day of harvest", es: "Último día de cosecha" },
		description: {
			en: "The day by which half of the operations had finished picking all of their crops.",
			es: "El día en que la mitad de las fincas ya había terminado de cosechar todos sus cultivos.",
		},
	},
] as const;

/** Loss, yield, and the base quantities that the published cells add up in. */
export const afterHarvestMeasures: Measure[] = [
	{
		key: "crop_loss",
		kind: "ratio",
		label: { en: "Crop loss", es: "Pérdida de cosecha" },
		description: {
			en: "Pounds not picked as a share of a normal crop, over all reporting operations together.",
			es: "Libras que no se cosecharon, como parte de una cosecha normal, de todas las fincas juntas.",
		},
		unit: "percent",
		decimals: 0,
		worse: "more",
		hue: "loss",
		numerator: {
			terms: [
				{ question: "normal_crop", times: 1 },
				{ question: "harvested", times: -1 },
			],
		},
		denominator: { terms: [{ question: "normal_crop", times: 1 }] },
		scale: 100,
		acrossCrops: true,
		base: false,
		protects: ["normal_crop_lb", "harvested_lb"],
	},
	{
		key: "freeze_loss",
		// What a freeze took is a part of the crop, so its interval is that of a share.
		kind: "proportion",
		label: { en: "Loss to freeze or frost", es: "Pérdida por helada" },
		description: {
			en: "Pounds lost to freeze or frost as a share of a normal crop. What took the fruit is asked once for all crops of an operation, so it is told of all crops together.",
			es: "Libras perdidas por helada, como parte de una cosecha normal. La causa se pregunta una vez para todos los cultivos de la finca, y por eso se da para todos juntos.",
		},
		unit: "percent",
		decimals: 0,
		worse: "more",
		hue: "loss",
		numerator: {
			terms: [
				{ question: "normal_crop", times: 1, share: "cause_freeze" },
				{ question: "harvested", times: -1, share: "cause_freeze" },
			],
			atLeast: 0,
		},
		denominator: { terms: [{ question: "normal_crop", times: 1 }] },
		scale: 100,
		acrossCrops: true,
		base: false,
		protects: ["normal_crop_lb", "harvested_lb"],
	},
	{
		key: "total_loss",
		kind: "proportion",
		label: { en: "Operations that lost everything", es: "Fincas que lo perdieron todo" },
		description: {
			en: "Share of operations with the crop that picked nothing although a normal year brings some.",
			es: "Parte de las fincas con el cultivo que no cosecharon nada aunque en un año normal sí cosechan.",
		},
		unit: "percent",
		decimals: 0,
		worse: "more",
		hue: "loss",
		numerator: {
			indicator: {
				all: [
					{ compare: ">", question: "normal_crop", to: { value: 0 } },
					{ compare: "=", question: "harvested", to: { value: 0 } },
				],
			},
		},
		denominator: { one: true },
		scale: 100,
		acrossCrops: true,
		base: false,
	},
	{
		key: "yield_per_tree",
		kind: "ratio",
		label: { en: "Yield per bearing tree or bush", es: "Rendimiento por árbol o arbusto en producción" },
		description: {
			en: "Pounds picked per tree or bush in bearing.",
			es: "Libras cosechadas por árbol o arbusto en producción.",
		},
		unit: "lb_per_tree",
		decimals: 1,
		worse: "less",
		hue: "yield",
		numerator: { terms: [{ question: "harvested", times: 1 }] },
		denominator: { terms: [{ question: "bearing_trees", times: 1 }] },
		scale: 1,
		acrossCrops: false,
		base: false,
		protects: ["harvested_lb", "bearing_trees"],
	},
	...harvestDays.map(({ key, label, description }): Measure => ({
		key,
		kind: "day",
		label,
		description,
		unit: "day",
		decimals: 0,
		worse: null,
		hue: "yield",
		numerator: { day: key },
		denominator: { one: true },
		scale: 1,
		acrossCrops: true,
		base: false,
	})),
	...(["bearing_trees", "normal_crop", "harvested"] as const).map((question) => ({
		key: question === "bearing_trees" ? "base.bearing_trees" : `base.${question}_lb`,
		kind: "total" as const,
		label: {
			bearing_trees: { en: "Bearing trees or bushes", es: "Árboles o arbustos en producción" },
			normal_crop: { en: "Normal crop", es: "Cosecha normal" },
			harvested: { en: "Harvested", es: "Cosechado" },
		}[question],
		description: {
			bearing_trees: { en: "Trees or bushes in bearing.", es: "Árboles o arbustos en producción." },
			normal_crop: { en: "Pounds in a normal year.", es: "Libras en un año normal." },
			harvested: { en: "Pounds picked.", es: "Libras cosechadas." },
		}[question],
		unit: question === "bearing_trees" ? ("trees" as const) : ("lb" as const),
		decimals: 0,
		worse: null,
		hue: "yield" as const,
		numerator: { terms: [{ question, times: 1 }] },
		denominator: null,
		scale: 1,
		acrossCrops: true,
		base: true,
	})),
];

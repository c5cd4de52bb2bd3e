import type { Measure } from "#app/collect/form.ts";

const stages = [
	{
		key: "first_bloom",
		label: { en: "First bloom", es: "Primera flor" },
		description: {
			en: "The day by which half of the operations had their first flowers of the crop open. Where several plantings of it bloomed, the earliest counts.",
			es: "El día en que la mitad de las fincas ya tenía abiertas las primeras flores del cultivo. Donde florecieron varias plantaciones, cuenta la más temprana.",
		},
	},
	{
		key: "full_bloom",
		label: { en: "Full bloom", es: "Plena flor" },
		description: {
			en: "The day by which half of the operations had a planting of the crop in full bloom. Where several plantings of it bloomed, the earliest counts.",
			es: "El día en que la mitad de las fincas ya tenía una plantación del cultivo en plena flor. Donde florecieron varias plantaciones, cuenta la más temprana.",
		},
	},
	{
		key: "petal_fall",
		label: { en: "Petal fall", es: "Caída de pétalos" },
		description: {
			en: "The day by which most petals of the crop had fallen at half of the operations. Where several plantings of it bloomed, the latest counts.",
			es: "El día en que ya habían caído casi todos los pétalos del cultivo en la mitad de las fincas. Donde florecieron varias plantaciones, cuenta la más tardía.",
		},
		take: "latest",
	},
] as const;

/** When each crop bloomed. Of all crops together it would say more of what is planted than of the spring. */
export const bloomDayMeasures: Measure[] = stages.map(({ key, label, description, ...more }) => ({
	key,
	kind: "day",
	label,
	description,
	unit: "day",
	decimals: 0,
	worse: null,
	hue: "bloom",
	numerator: { day: key, ...more },
	denominator: { one: true },
	scale: 1,
	acrossCrops: false,
	base: false,
}));

import type { FormDefinition } from "#app/collect/form.ts";
import { bloomDayMeasures } from "./bloom-measures.ts";
import { knownTrees, knownTreesBase } from "./known-trees.ts";
import { noteQuestion } from "./note.ts";

/** Bloom watch: when each planting bloomed, how much, and whether bees could fly. Answered once petals fall, or before. */
export const bloomWatch: FormDefinition = {
	key: "bloom_watch",
	title: { en: "Bloom watch", es: "Seguimiento de la floración" },
	minutes: 3,
	screens: [
		{
			key: "bloom",
			title: { en: "Bloom of your planting", es: "Floración de su plantación" },
			help: {
				en: "An approximate day is good enough. Leave out what has not come yet.",
				es: "Basta con un día aproximado. Deje en blanco lo que todavía no ha llegado.",
			},
			perPlanting: true,
			questions: [
				{
					key: "bloom_density",
					type: "rating",
					text: {
						en: "How much did it bloom, compared with a normal year?",
						es: "¿Cuánto floreció, comparado con un año normal?",
					},
					label: { en: "Bloom compared with a normal year", es: "Floración comparada con un año normal" },
					required: true,
					sensitive: false,
					// Scored as the share of the planting's trees that bloomed less than normal: all of them or none.
					options: [
						{ key: "none", text: { en: "Hardly any flowers", es: "Casi ninguna flor" }, score: 100 },
						{ key: "light", text: { en: "Less than normal", es: "Menos de lo normal" }, score: 100 },
						{ key: "normal", text: { en: "Like a normal year", es: "Como en un año normal" }, score: 0 },
						{ key: "heavy", text: { en: "More than normal", es: "Más de lo normal" }, score: 0 },
					],
				},
				{
					key: "first_bloom",
					type: "date",
					text: { en: "When did the first flowers open?", es: "¿Cuándo se abrieron las primeras flores?" },
					label: { en: "First bloom", es: "Primera flor" },
					required: false,
					sensitive: false,
				},
				{
					key: "full_bloom",
					type: "date",
					notBefore: "first_bloom",
					text: { en: "When was it in full bloom?", es: "¿Cuándo estuvo en plena flor?" },
					label: { en: "Full bloom", es: "Plena flor" },
					help: { en: "When most of its flowers were open.", es: "Cuando la mayoría de las flores estaba abierta." },
					required: false,
					sensitive: false,
				},
				{
					key: "petal_fall",
					type: "date",
					notBefore: "full_bloom",
					text: { en: "When had most petals fallen?", es: "¿Cuándo habían caído casi todos los pétalos?" },
					label: { en: "Petal fall", es: "Caída de pétalos" },
					required: false,
					sensitive: false,
				},
			],
			checks: [
				{
					key: "petals_before_first_flower",
					kind: "hard",
					when: { compare: "<", question: "petal_fall", to: { question: "first_bloom" } },
					question: "petal_fall",
					message: {
						en: "Petal fall must not be before the first bloom",
						es: "La caída de pétalos no puede ser antes de la primera flor",
					},
				},
				{
					key: "full_bloom_at_once",
					kind: "soft",
					when: {
						any: [
							{ compare: "=", question: "petal_fall", to: { question: "first_bloom" } },
							{ compare: "=", question: "petal_fall", to: { question: "full_bloom" } },
						],
					},
					question: "petal_fall",
					message: {
						en: "The petals fell on a day when the flowers were open.",
						es: "Los pétalos cayeron el mismo día en que las flores estaban abiertas.",
					},
				},
			],
		},
		{
			key: "bees",
			title: { en: "Weather for bees", es: "El tiempo para las abejas" },
			perPlanting: false,
			condition: { any_planting: { compare: "!=", question: "bloom_density", to: { value: "none" } } },
			questions: [
				{
					key: "bee_weather",
					type: "rating",
					text: {
						en: "How was the weather for bees while your plantings were in bloom?",
						es: "¿Cómo estuvo el tiempo para las abejas mientras sus plantaciones estaban en flor?",
					},
					label: { en: "Weather for bees", es: "El tiempo para las abejas" },
					required: true,
					sensitive: false,
					options: [
						{
							key: "poor",
							text: { en: "Mostly too cold, wet or windy", es: "Casi siempre demasiado frío, lluvioso o con viento" },
						},
						{ key: "mixed", text: { en: "Good on some days", es: "Bueno algunos días" } },
						{ key: "good", text: { en: "Good on most days", es: "Bueno casi todos los días" } },
					],
				},
			],
		},
		{ key: "note", title: { en: "A last word", es: "Algo más" }, perPlanting: false, questions: [noteQuestion] },
	],
	measures: [
		...bloomDayMeasures,
		{
			key: "light_bloom",
			kind: "proportion",
			label: {
				en: "Trees or bushes with less bloom than normal",
				es: "Árboles o arbustos con menos flor de lo normal",
			},
			description: {
				en: "Share of bearing trees or bushes that stand in plantings with less bloom than normal, or hardly any.",
				es: "Parte de los árboles o arbustos en producción en plantaciones con menos flor de lo normal, o casi ninguna.",
			},
			unit: "percent",
			decimals: 0,
			worse: "more",
			hue: "bloom",
			numerator: { terms: [{ known: "bearing_trees", times: 1, share: "bloom_density" }] },
			denominator: knownTrees,
			scale: 100,
			acrossCrops: true,
			base: false,
			protects: ["light_bloom_trees", "bearing_trees"],
		},
		{
			key: "poor_bee_weather",
			kind: "proportion",
			label: { en: "Operations with poor weather for bees", es: "Fincas con mal tiempo para las abejas" },
			description: {
				en: "Share of operations with bloom where it was mostly too cold, wet or windy for bees.",
				es: "Parte de las fincas con flor donde casi siempre hubo demasiado frío, lluvia o viento para las abejas.",
			},
			unit: "percent",
			decimals: 0,
			worse: "more",
			hue: "bloom",
			numerator: { indicator: { compare: "=", question: "bee_weather", to: { value: "poor" } } },
			denominator: { one: true },
			scale: 100,
			acrossCrops: true,
			base: false,
		},
		knownTreesBase,
		{
			...knownTreesBase,
			key: "base.light_bloom_trees",
			label: { en: "Trees or bushes with less bloom", es: "Árboles o arbustos con menos flor" },
			description: {
				en: "Trees or bushes with less bloom than normal.",
				es: "Árboles o arbustos con menos flor de lo normal.",
			},
			numerator: { terms: [{ known: "bearing_trees", times: 1, share: "bloom_density" }] },
		},
	],
};

import type { FormDefinition, Measure, Screen } from "#app/collect/form.ts";
import { knownTrees, knownTreesBase } from "./known-trees.ts";
import { noteQuestion } from "./note.ts";
import { photoScreen } from "./photos.ts";

const night: Screen = {
	key: "night",
	title: { en: "The coldest night", es: "La noche más fría" },
	perPlanting: false,
	questions: [
		{
			key: "coldest_day",
			type: "date",
			text: { en: "On which morning was it coldest?", es: "¿Qué mañana hizo más frío?" },
			label: { en: "The coldest morning", es: "La mañana más fría" },
			required: true,
			sensitive: false,
		},
		{
			key: "coldest",
			type: "number",
			unitFamily: "temperature",
			text: {
				en: "What was the lowest temperature in your orchard?",
				es: "¿Cuál fue la temperatura más baja en su huerta?",
			},
			label: { en: "The lowest temperature", es: "La temperatura más baja" },
			help: {
				en: "From a thermometer among your plants, if you have one.",
				es: "De un termómetro entre sus plantas, si lo tiene.",
			},
			required: true,
			limits: { hardMin: -80, hardMax: 100, softMin: 0 },
			sensitive: false,
		},
		{
			key: "hours_below",
			type: "number",
			unitFamily: "count",
			text: { en: "For how many hours was it below freezing?", es: "¿Cuántas horas duró la helada?" },
			label: { en: "Hours below freezing", es: "Horas de helada" },
			help: {
				en: "Below 32 °F (0 °C), in that night. Whole hours are fine.",
				es: "Por debajo de 32 °F (0 °C), en esa noche. Bastan horas enteras.",
			},
			required: true,
			limits: { hardMin: 0, hardMax: 48, softMax: 16 },
			sensitive: false,
		},
	],
	checks: [
		{
			key: "no_frost",
			kind: "soft",
			when: { compare: ">", question: "coldest", to: { value: 32 } },
			question: "coldest",
			message: { en: "That is above freezing.", es: "A esa temperatura no hiela." },
		},
		{
			key: "frost_without_hours",
			kind: "soft",
			when: {
				all: [
					{ compare: "<", question: "coldest", to: { value: 31 } },
					{ compare: "=", question: "hours_below", to: { value: 0 } },
				],
			},
			question: "hours_below",
			message: {
				en: "It froze, but you gave no hours below freezing.",
				es: "Heló, pero usted no indicó ninguna hora de helada.",
			},
		},
	],
};

const protection: Screen = {
	key: "protection",
	title: { en: "Protection", es: "Protección" },
	perPlanting: false,
	questions: [
		{
			key: "protection",
			type: "several",
			text: {
				en: "What did you do that night to keep the flowers warm?",
				es: "¿Qué hizo esa noche para proteger las flores del frío?",
			},
			label: { en: "Protection", es: "Protección" },
			help: {
				en: "Fans, heaters and water in the dark can hurt people. Do not work alone, keep fire and fuel apart, and ask your extension office before you try something new.",
				es: "Los ventiladores, los calentadores y el agua en la oscuridad pueden lastimar. No trabaje a solas, mantenga el fuego lejos del combustible y consulte a su oficina de extensión antes de probar algo nuevo.",
			},
			required: true,
			sensitive: false,
			options: [
				{ key: "water", text: { en: "Ran water or sprinklers", es: "Regué con agua o aspersores" } },
				{ key: "fans", text: { en: "Ran fans or wind machines", es: "Usé ventiladores o máquinas de viento" } },
				{ key: "heat", text: { en: "Ran heaters or lit fires", es: "Usé calentadores o fogatas" } },
				{ key: "covers", text: { en: "Covered the plants", es: "Cubrí las plantas" } },
				{ key: "other", text: { en: "Something else", es: "Otra cosa" } },
				{ key: "none", text: { en: "Nothing", es: "Nada" }, alone: true },
			],
		},
	],
};

const buds: Screen = {
	key: "buds",
	title: { en: "Buds and flowers", es: "Yemas y flores" },
	perPlanting: true,
	questions: [
		{
			key: "stage",
			type: "choice",
			text: { en: "How far along were they that night?", es: "¿En qué etapa estaban esa noche?" },
			label: { en: "Growth stage", es: "Etapa" },
			required: true,
			sensitive: false,
			options: [
				{ key: "closed", text: { en: "Buds closed", es: "Yemas cerradas" } },
				{ key: "green", text: { en: "Buds swollen or showing green", es: "Yemas hinchadas o con puntas verdes" } },
				{ key: "clusters", text: { en: "Flower buds out, none open", es: "Botones florales, ninguno abierto" } },
				{ key: "first_flowers", text: { en: "First flowers open", es: "Primeras flores abiertas" } },
				{ key: "full_bloom", text: { en: "Full bloom", es: "Plena flor" } },
				{ key: "petal_fall", text: { en: "Petals falling", es: "Cayendo los pétalos" } },
				{ key: "fruit", text: { en: "Small fruit", es: "Fruta pequeña" } },
			],
		},
		{
			key: "buds_cut",
			type: "number",
			unitFamily: "count",
			text: { en: "How many buds or flowers did you cut open?", es: "¿Cuántas yemas o flores abrió con navaja?" },
			label: { en: "Buds or flowers that you cut open", es: "Yemas o flores que abrió" },
			help: {
				en: "Take them from several plants, high and low; 50 tell more than 10. Enter 0 if you cut none.",
				es: "Tómelas de varias plantas, de arriba y de abajo; 50 dicen más que 10. Escriba 0 si no abrió ninguna.",
			},
			required: true,
			limits: { hardMin: 0, hardMax: 100_000, softMax: 2000 },
			sensitive: false,
		},
		{
			key: "buds_dead",
			type: "number",
			unitFamily: "count",
			text: { en: "How many of these were dead?", es: "¿Cuántas de ellas estaban muertas?" },
			label: { en: "Dead ones among those", es: "Muertas entre ellas" },
			help: { en: "Brown or black inside.", es: "Cafés o negras por dentro." },
			required: true,
			condition: { compare: ">", question: "buds_cut", to: { value: 0 } },
			limits: { hardMin: 0, hardMax: 100_000 },
			sensitive: false,
		},
	],
	checks: [
		{
			key: "more_dead_than_cut",
			kind: "hard",
			when: { compare: ">", question: "buds_dead", to: { question: "buds_cut" } },
			question: "buds_dead",
			message: {
				en: "The dead ones must not be more than those you cut open",
				es: "Las muertas no pueden ser más que las que abrió",
			},
		},
	],
};

/** Trees times the share of their buds that was dead, planting by planting. */
const killed: Measure["numerator"] = {
	terms: [{ known: "bearing_trees", times: 1, share: { part: "buds_dead", whole: "buds_cut" } }],
};

/** After a freeze: how cold it was, at which stage, and what share of the buds it killed. Asked in the week after. */
export const afterFreeze: FormDefinition = {
	key: "after_freeze",
	title: { en: "After a freeze", es: "Después de una helada" },
	minutes: 4,
	screens: [
		night,
		buds,
		protection,
		photoScreen({ en: "Photos of the damage", es: "Fotos del daño" }),
		{ key: "note", title: { en: "A last word", es: "Algo más" }, perPlanting: false, questions: [noteQuestion] },
	],
	measures: [
		{
			key: "killed_bloom",
			kind: "proportion",
			label: { en: "Buds and flowers killed", es: "Yemas y flores muertas" },
			description: {
				en: "Share of buds and flowers found dead when cut open, each planting weighed by its bearing trees or bushes.",
				es: "Parte de las yemas y flores halladas muertas al abrirlas; cada plantación pesa por sus árboles o arbustos en producción.",
			},
			unit: "percent",
			decimals: 0,
			worse: "more",
			hue: "cold",
			numerator: killed,
			denominator: knownTrees,
			scale: 100,
			acrossCrops: true,
			base: false,
			protects: ["killed_trees", "bearing_trees"],
		},
		{
			key: "protected",
			kind: "proportion",
			label: { en: "Operations that protected their flowers", es: "Fincas que protegieron sus flores" },
			description: {
				en: "Share of operations that ran water, fans or heat, covered plants, or did something else against the cold.",
				es: "Parte de las fincas que usaron agua, ventiladores o calor, cubrieron plantas o hicieron otra cosa contra el frío.",
			},
			unit: "percent",
			decimals: 0,
			worse: null,
			hue: "cold",
			numerator: { indicator: { compare: "!=", question: "protection", to: { value: "none" } } },
			denominator: { one: true },
			scale: 100,
			acrossCrops: true,
			base: false,
		},
		knownTreesBase,
		{
			...knownTreesBase,
			key: "base.killed_trees",
			label: { en: "Bloom killed, in trees or bushes", es: "Flor muerta, en árboles o arbustos" },
			description: {
				en: "Bearing trees or bushes times the share of their buds and flowers that was dead.",
				es: "Árboles o arbustos en producción por la parte de sus yemas y flores que estaba muerta.",
			},
			numerator: killed,
		},
	],
};

import type { FormDefinition, Screen } from "#app/collect/form.ts";
import { afterHarvestMeasures } from "./after-harvest-measures.ts";
import { noteQuestion } from "./note.ts";

const causes = [
	["freeze", "Freeze or frost", "Helada o congelación"],
	["poor_pollination", "Poor pollination", "Mala polinización"],
	["hail_wind", "Hail or wind", "Granizo o viento"],
	["drought_heat", "Drought or heat", "Sequía o calor"],
	["too_wet", "Too much rain", "Demasiada lluvia"],
	["disease", "Disease", "Enfermedades"],
	["pests", "Insects, mites, birds or deer", "Insectos, ácaros, aves o venados"],
	["other", "Something else", "Otra causa"],
] as const;

/** Pounds told in bushels, tons told in pounds, and numbers of the wrong planting. */
const plantingChecks: Screen["checks"] = [
	{
		key: "picked_far_above_normal",
		kind: "soft",
		when: { compare: ">", question: "harvested", to: { question: "normal_crop", times: 2 } },
		question: "harvested",
		message: {
			en: "You picked more than twice what a normal year brings.",
			es: "Usted cosechó más del doble de lo que da un año normal.",
		},
	},
	{
		key: "normal_above_a_tree",
		kind: "soft",
		when: {
			all: [
				{ compare: ">", question: "bearing_trees", to: { value: 0 } },
				{ compare: ">", question: "normal_crop", to: { question: "bearing_trees", times: 1000 } },
			],
		},
		question: "normal_crop",
		message: {
			en: "That is more than 1,000 lb from each tree or bush. Check the number and its unit.",
			es: "Eso da más de 1,000 lb por árbol o arbusto. Revise el número y su unidad.",
		},
	},
	{
		key: "normal_below_a_tree",
		kind: "soft",
		when: { compare: "<", question: "normal_crop", to: { question: "bearing_trees", times: 0.1 } },
		question: "normal_crop",
		message: {
			en: "That is next to nothing from each tree or bush in a normal year. Check the number and its unit.",
			es: "Eso da casi nada por árbol o arbusto en un año normal. Revise el número y su unidad.",
		},
	},
	{
		key: "picked_from_no_tree",
		kind: "soft",
		when: {
			all: [
				{ compare: "=", question: "bearing_trees", to: { value: 0 } },
				{ compare: ">", question: "harvested", to: { value: 0 } },
			],
		},
		question: "harvested",
		message: {
			en: "You picked fruit, but no tree or bush was old enough to bear.",
			es: "Usted cosechó fruta, pero ninguna planta estaba en edad de producir.",
		},
	},
];

/** After harvest: what a normal year brings, what was picked, and what took the rest. */
export const afterHarvest: FormDefinition = {
	key: "after_harvest",
	title: { en: "After harvest", es: "Después de la cosecha" },
	minutes: 5,
	screens: [
		{
			key: "plantings",
			title: { en: "Your planting", es: "Su plantación" },
			perPlanting: true,
			questions: [
				{
					key: "bearing_trees",
					type: "number",
					unitFamily: "trees",
					prefill: "bearing_trees",
					text: {
						en: "How many were old enough to bear this season?",
						es: "¿Cuántas plantas ya estaban en edad de producir esta temporada?",
					},
					label: { en: "Trees or bushes in bearing", es: "Árboles o arbustos en producción" },
					help: {
						en: "Trees or bushes in bearing, whether or not they had fruit.",
						es: "Árboles o arbustos en producción, hayan dado fruta o no.",
					},
					required: true,
					limits: { hardMin: 0, hardMax: 2_000_000, softMax: 100_000 },
					sensitive: false,
				},
				{
					key: "normal_crop",
					type: "number",
					unitFamily: "mass",
					prefill: "last_season",
					text: {
						en: "In a normal year, how much would you pick from this planting?",
						es: "En un año normal, ¿cuánto cosecharía de esta plantación?",
					},
					label: { en: "Normal crop", es: "Cosecha normal" },
					help: { en: "Your best estimate is fine.", es: "Basta con su mejor cálculo." },
					required: true,
					limits: { hardMin: 0, hardMax: 200_000_000 },
					sensitive: false,
				},
				{
					key: "harvested",
					type: "number",
					unitFamily: "mass",
					text: { en: "How much did you pick from it this season?", es: "¿Cuánto cosechó de ella esta temporada?" },
					label: { en: "What you picked", es: "Lo que cosechó" },
					help: { en: "Enter 0 if everything was lost.", es: "Escriba 0 si se perdió todo." },
					required: true,
					limits: { hardMin: 0, hardMax: 200_000_000 },
					sensitive: false,
				},
			],
			checks: plantingChecks,
		},
		{
			key: "causes",
			title: { en: "What took the fruit", es: "Qué causó la pérdida" },
			help: {
				en: "Of all that was lost, what percent went to each? The shares must add up to 100.",
				es: "De todo lo que se perdió, ¿qué porcentaje se debió a cada causa? Los porcentajes deben sumar 100.",
			},
			perPlanting: false,
			condition: { any_planting: { compare: "<", question: "harvested", to: { question: "normal_crop" } } },
			sumToHundred: causes.map(([key]) => `cause_${key}`),
			questions: causes.map(([key, en, es]) => ({
				key: `cause_${key}`,
				type: "percent" as const,
				text: { en, es },
				required: false,
				limits: { hardMin: 0, hardMax: 100 },
				sensitive: false,
			})),
		},
		{
			key: "harvest_days",
			title: { en: "Harvest days", es: "Días de cosecha" },
			perPlanting: false,
			questions: [
				{
					key: "first_harvest",
					type: "date",
					text: { en: "First day of harvest", es: "Primer día de cosecha" },
					required: false,
					sensitive: false,
				},
				{
					key: "last_harvest",
					type: "date",
					notBefore: "first_harvest",
					text: { en: "Last day of harvest", es: "Último día de cosecha" },
					required: false,
					sensitive: false,
				},
			],
		},
		{
			key: "next_year",
			title: { en: "Looking to next year", es: "Para el próximo año" },
			perPlanting: false,
			questions: [
				{
					key: "bud_set",
					type: "rating",
					text: { en: "How do the buds for next year look?", es: "¿Cómo se ven las yemas para el próximo año?" },
					label: { en: "Buds for next year", es: "Yemas para el próximo año" },
					required: false,
					sensitive: false,
					options: [
						{ key: "none", text: { en: "Hardly any", es: "Casi ninguna" } },
						{ key: "light", text: { en: "Light", es: "Pocas" } },
						{ key: "normal", text: { en: "Normal", es: "Normales" } },
						{ key: "heavy", text: { en: "Heavy", es: "Muchas" } },
					],
				},
				{
					key: "other_cause",
					type: "short_text",
					text: {
						en: "You said that something else took fruit. What was it?",
						es: "Usted indicó que hubo otra causa de pérdida. ¿Cuál fue?",
					},
					label: { en: "What else took fruit", es: "Qué otra causa hubo" },
					required: false,
					maxLength: 200,
					sensitive: false,
					condition: { compare: ">", question: "cause_other", to: { value: 0 } },
					whenUnsure: "skip",
					codes: {
						moves: "cause_other",
						to: causes.map(([key]) => `cause_${key}`).filter((key) => key !== "cause_other"),
					},
				},
				noteQuestion,
			],
		},
	],
	measures: afterHarvestMeasures,
};

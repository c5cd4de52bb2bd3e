import type { Condition, FormDefinition, Measure, Screen } from "#app/collect/form.ts";
import { otherKey } from "#app/lib/other-option.ts";
import { knownTrees, knownTreesBase } from "./known-trees.ts";
import { noteQuestion } from "./note.ts";
import { photoScreen } from "./photos.ts";
import { type Pest, pests as list } from "./pest-list.ts";

const isSeen = ({ key }: Pest): Condition => ({ compare: "=", question: "seen", to: { value: key } });

const seen: Screen = {
	key: "seen",
	title: { en: "What you saw", es: "Lo que vio" },
	perPlanting: true,
	questions: [
		{
			key: "seen",
			type: "several",
			text: {
				en: "Which of these did you see in this planting this season?",
				es: "¿Cuáles de estas vio en esta plantación esta temporada?",
			},
			label: { en: "What you saw", es: "Lo que vio" },
			help: {
				en: "Before you spray, read the label: it is the law. Some products need a license. The advice of your local extension office comes first.",
				es: "Antes de fumigar, lea la etiqueta: es la ley. Algunos productos exigen licencia. Primero está el consejo de su oficina local de extensión.",
			},
			required: true,
			sensitive: false,
			options: [
				...list.map(({ key, name, crops }) => ({ key, text: name, crops: [...crops] })),
				{ key: otherKey, text: { en: "Something else", es: "Otra cosa" } },
				{ key: "none", text: { en: "None of these", es: "Ninguna de estas" }, alone: true },
			],
		},
	],
};

/** What the list lacks, told in words; an associate can give it a code, and it counts as seen. */
const otherScreen: Screen = {
	key: "other_pest",
	title: { en: "Something else", es: "Otra cosa" },
	perPlanting: true,
	condition: { compare: "=", question: "seen", to: { value: otherKey } },
	whenUnsure: "skip",
	questions: [
		{
			key: "other_pest",
			type: "short_text",
			text: { en: "What else did you see in this planting?", es: "¿Qué otra cosa vio en esta plantación?" },
			label: { en: "What else you saw", es: "Qué otra cosa vio" },
			required: false,
			maxLength: 200,
			sensitive: false,
			codes: { adds: "seen" },
		},
	],
};

/** What is asked of a pest in each planting where it was seen. */
function pestScreen(pest: Pest): Screen {
	const { key, name } = pest;
	return {
		key,
		title: name,
		perPlanting: true,
		condition: isSeen(pest),
		whenUnsure: "skip",
		questions: [
			{
				key: `${key}_trees`,
				type: "percent",
				text: {
					en: "Of the trees or bushes in this planting, what share had it?",
					es: "De los árboles o arbustos de esta plantación, ¿qué parte estaba afectada?",
				},
				label: { en: "Share that had it", es: "Parte afectada" },
				help: { en: "Your best estimate is fine.", es: "Basta con su mejor cálculo." },
				required: true,
				sensitive: false,
			},
			{
				key: `${key}_severity`,
				type: "rating",
				text: { en: "How bad was it on those?", es: "¿Qué tan grave fue en los afectados?" },
				label: { en: "How bad it was", es: "Qué tan grave fue" },
				required: true,
				sensitive: false,
				options: [
					{
						key: "light",
						text: { en: "Light: a few spots, bites or shoots", es: "Leve: unas pocas manchas, mordeduras o brotes" },
						score: 1,
					},
					{ key: "moderate", text: { en: "Moderate: easy to find", es: "Moderado: fácil de encontrar" }, score: 2 },
					{
						key: "severe",
						text: { en: "Severe: most leaves, shoots or fruit", es: "Grave: casi todas las hojas, brotes o frutos" },
						score: 3,
					},
				],
			},
			{
				key: `${key}_fruit`,
				type: "choice",
				text: { en: "Did it mark or spoil the fruit?", es: "¿Marcó o echó a perder la fruta?" },
				label: { en: "What it did to the fruit", es: "Lo que le hizo a la fruta" },
				help: {
					en: "Moldy or rotten fruit and nuts make people sick: throw them out. Ask your extension office before you sell or press fallen fruit.",
					es: "La fruta y las nueces podridas o con moho enferman a la gente: tírelas. Consulte a su oficina de extensión antes de vender o exprimir fruta caída.",
				},
				required: true,
				sensitive: false,
				options: [
					{ key: "no", text: { en: "No, or there was no fruit yet", es: "No, o todavía no había fruta" } },
					{ key: "marked", text: { en: "It marked some fruit", es: "Marcó parte de la fruta" } },
					{ key: "spoiled", text: { en: "It spoiled some fruit", es: "Echó a perder parte de la fruta" } },
				],
			},
		],
		checks: [
			{
				key: `${key}_on_none`,
				kind: "soft",
				when: { compare: "=", question: `${key}_trees`, to: { value: 0 } },
				question: `${key}_trees`,
				message: {
					en: "You said that you saw it in this planting, but that no tree or bush had it.",
					es: "Usted dijo que lo vio en esta plantación, pero que ningún árbol o arbusto estaba afectado.",
				},
			},
		],
	};
}

function measuresOf(pest: Pest): Measure[] {
	const { key, name, crops } = pest;
	const told = (en: string, es: string) => ({ en: `${name.en}: ${en}`, es: `${name.es}: ${es}` });
	const hurtFruit: Condition = {
		any: ["marked", "spoiled"].map((value) => ({ compare: "=", question: `${key}_fruit`, to: { value } })),
	};
	const shared = { worse: "more", hue: "pests", acrossCrops: false, base: false } as const;
	const share = { ...shared, kind: "proportion", unit: "percent", decimals: 0, scale: 100 } as const;
	const measures: Omit<Measure, "crops">[] = [
		{
			...share,
			key: `${key}_seen`,
			label: told("operations that saw it", "fincas donde se vio"),
			description: {
				en: "Share of operations with the crop that saw it in at least one planting.",
				es: "Parte de las fincas con el cultivo donde se vio en al menos una plantación.",
			},
			numerator: { indicator: { any_planting: isSeen(pest) } },
			denominator: { one: true },
		},
		{
			...share,
			key: `${key}_trees`,
			label: told("trees or bushes that had it", "árboles o arbustos afectados"),
			description: {
				en: "Share of bearing trees or bushes that had it; none where it was not seen.",
				es: "Parte de los árboles o arbustos en producción que estaban afectados; ninguno donde no se vio.",
			},
			numerator: { terms: [{ known: "bearing_trees", times: 1, share: `${key}_trees` }] },
			denominator: knownTrees,
			protects: ["bearing_trees"],
		},
		{
			...shared,
			key: `${key}_severity`,
			kind: "ratio",
			label: told("how bad it was", "qué tan grave fue"),
			description: {
				en: "Mean over bearing trees or bushes of how bad it was in their planting: 0 not seen, 1 light, 2 moderate, 3 severe.",
				es: "Promedio por árbol o arbusto en producción de qué tan grave fue en su plantación: 0 no se vio, 1 leve, 2 moderado, 3 grave.",
			},
			unit: "score",
			decimals: 1,
			// A score is counted like a percent, so a hundred times of it is the score itself.
			numerator: { terms: [{ known: "bearing_trees", times: 100, share: `${key}_severity` }] },
			denominator: knownTrees,
			protects: ["bearing_trees"],
			scale: 1,
		},
		{
			...share,
			key: `${key}_fruit`,
			label: told("operations with damaged fruit", "fincas con fruta dañada"),
			description: {
				en: "Share of operations with the crop where it marked or spoiled fruit in at least one planting.",
				es: "Parte de las fincas con el cultivo donde marcó o echó a perder fruta en al menos una plantación.",
			},
			numerator: { indicator: { any_planting: { all: [isSeen(pest), hurtFruit] } } },
			denominator: { one: true },
		},
	];
	return measures.map((measure) => ({ ...measure, crops: [...crops] }));
}

/** Pests and diseases: per planting which were seen, on how many trees, how bad, and what they did to the fruit. */
export const pests: FormDefinition = {
	key: "pests",
	title: { en: "Pests and diseases", es: "Plagas y enfermedades" },
	minutes: 5,
	screens: [
		seen,
		...list.map(pestScreen),
		otherScreen,
		photoScreen(
			{ en: "Photos of the pest or disease", es: "Fotos de la plaga o enfermedad" },
			{
				condition: { any_planting: { compare: "!=", question: "seen", to: { value: "none" } } },
				whenUnsure: "skip",
			},
		),
		{ key: "note", title: { en: "A last word", es: "Algo más" }, perPlanting: false, questions: [noteQuestion] },
	],
	measures: [...list.flatMap(measuresOf), knownTreesBase],
};

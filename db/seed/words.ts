// Invented throughout. Cultivars are plant names.
export const givenNames = [
	"Wren",
	"Odile",
	"Tobin",
	"Marisol",
	"Efraín",
	"Lotte",
	"Anselm",
	"Yesenia",
	"Corwin",
	"Petra",
	"Ismael",
	"Hedda",
];
export const familyNames = [
	"Quillfeather",
	"Brandmoor",
	"Alcázar",
	"Tindermark",
	"Osterlund",
	"Vallejuelo",
	"Harrowgate",
	"Mossbeck",
	"Peñaloza",
	"Dunmallow",
];
export const placeNames = [
	"Quail Bend",
	"Cold Spring",
	"Windy Knob",
	"Otter Slough",
	"Long Ridge",
	"Blue Heron",
	"Stony Ford",
	"Burr Oak",
	"Hollow Lane",
	"Three Elms",
	"Fox Prairie",
	"Sand Bluff",
];
export const operationKinds = ["Orchard", "Orchards", "Fruit Farm", "Fruit", "Acres", "Farm"];

/** What growers write in the last box, by language; `{crop}` is never named, so each fits every operation. */
export const comments = {
	en: [
		"We pick by hand and could use more help in the last two weeks.",
		"The low end of the block always freezes first. The rows on the hill did fine.",
		"Please send the form earlier, I had already put my notes away.",
		"Deer came through the fence twice this summer.",
		"First year that the young trees gave anything worth picking.",
		"Birds were worse than last year.",
		"We sold everything at the farm by the end of the season.",
		"Is anybody else seeing small fruit this year?",
		"I am new to this, the pounds are my best guess.",
		"Thank you for telling us how it went for the others.",
	],
	es: [
		"La parte baja siempre se hiela primero. En la loma no hubo daño.",
		"Nos faltó gente para la cosecha en las últimas dos semanas.",
		"Los pájaros hicieron más daño que el año pasado.",
		"Las libras son mi mejor cálculo, vendemos por caja.",
		"Gracias por contarnos cómo les fue a los demás.",
	],
} as const;
/** What is written in a year whose spring froze hard. */
export const freezeComments = {
	en: [
		"Everything was open when the cold came. We were up all night with fires and it did not help.",
		"Full bloom that week. I have not seen it this bad in thirty years.",
		"Only the top of the trees set fruit.",
		"We will not open for picking this fall.",
	],
	es: [
		"Todo estaba en flor cuando llegó el frío. Pasamos la noche en vela y no sirvió.",
		"Solo la parte alta de los árboles dio fruta.",
		"Este año no abrimos para que la gente venga a cosechar.",
	],
} as const;

/** What growers name when something else took fruit: some of it has a place in the form's own list. */
export const otherCauseWords = {
	en: [
		"Deer in the young rows",
		"spray drift from next door",
		"Could not find pickers",
		"the cold in May",
		"raccoons",
		"Hail, twice",
		"cracked after all that rain",
		"Irrigation pump broke",
	],
	es: ["No hubo quien cosechara", "los pájaros", "granizo en junio", "Se descompuso la bomba de riego"],
} as const;

/** What the associate adds to a season's report, without a figure: those are references into the release. */
export const reportWords: Record<number, { en: string; es: string }> = {
	2024: {
		en: "Growers describe an ordinary season. Among the causes they name for what was lost, none stands out.",
		es: "Los productores describen una temporada común. Entre las causas de pérdida que mencionan, ninguna sobresale.",
	},
	2025: {
		en: "A hard freeze in late April met most orchards between central Iowa and southern Wisconsin in bloom. Farther north, growers describe an ordinary year. What was left to pick ripened a few days late.",
		es: "Una fuerte helada a fines de abril encontró en flor a la mayoría de las huertas entre el centro de Iowa y el sur de Wisconsin. Más al norte los productores hablan de un año común. Lo que quedó por cosechar maduró unos días más tarde.",
	},
};

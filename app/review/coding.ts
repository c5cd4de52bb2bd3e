import type { FormDefinition, Question } from "#app/collect/form.ts";
import { otherKey } from "#app/lib/other-option.ts";
import { likeness, plainText } from "#app/lib/closeness.ts";
import type { Words } from "#app/lib/words.ts";

export type CodedQuestion = Extract<Question, { type: "short_text" }> & {
	codes: NonNullable<Extract<Question, { type: "short_text" }>["codes"]>;
};
/** What words can be counted as. */
export type Code = { key: string; text: Words };

/** The questions of a form whose words can be given a code. */
export function codedQuestionsOf({ screens }: Pick<FormDefinition, "screens">): CodedQuestion[] {
	return screens
		.flatMap(({ questions }) => questions)
		.filter((question): question is CodedQuestion => question.type === "short_text" && question.codes !== undefined);
}

/** The codes of a question: other shares of its screen, or the options of a question that are offered for a crop. */
export function codesOf(
	{ screens }: Pick<FormDefinition, "screens">,
	{ codes }: CodedQuestion,
	cropKey: string | null,
): Code[] {
	const questions = screens.flatMap((screen) => screen.questions);
	if ("moves" in codes)
		return codes.to.flatMap((key) => {
			const found = questions.find((question) => question.key === key);
			return found ? [{ key, text: found.label ?? found.text }] : [];
		});
	const chosen = questions.find(({ key }) => key === codes.adds);
	if (chosen?.type !== "several") return [];
	return chosen.options
		.filter(({ key, alone, crops }) => !alone && key !== otherKey && (crops?.includes(cropKey ?? "") ?? true))
		.map(({ key, text }) => ({ key, text }));
}

/** What growers call a cause or a pest beside its name in the form, without accents. Common speech, no source. */
const spoken: Record<string, string[]> = {
	cause_freeze: ["frost", "froze", "frozen", "freezing", "cold", "helada", "heladas", "hielo", "frio", "congelo"],
	cause_poor_pollination: ["bees", "bee", "pollination", "pollinators", "abejas", "polinizacion"],
	cause_hail_wind: ["hail", "storm", "wind", "tornado", "derecho", "granizo", "viento", "tormenta"],
	cause_drought_heat: ["drought", "dry", "heat", "hot", "sequia", "calor", "seco", "seca"],
	cause_too_wet: ["rain", "wet", "flood", "flooded", "cracking", "lluvia", "inundacion", "agua"],
	cause_disease: ["blight", "scab", "rot", "mildew", "disease", "fungus", "tizon", "sarna", "pudricion", "hongo"],
	cause_pests: (
		"deer birds bird raccoon raccoons insects bugs beetles moth cicadas voles venado venados aves pajaros insectos " +
		"mapaches plaga plagas ardillas"
	).split(" "),
	wing_drosophila: ["swd", "fruit fly", "fruit flies", "mosca"],
	japanese_beetle: ["jap beetles", "japanese beetles", "escarabajos", "escarabajo"],
	codling_moth: ["worms", "wormy", "codling", "gusano", "gusanos"],
	plum_curculio: ["curculio", "picudo"],
	fire_blight: ["fireblight", "tizon"],
	scab: ["scab", "sarna"],
	brown_rot: ["rot", "mummies", "pudricion", "monilia"],
};

const mostSuggested = 3;

/**
 * The codes that words most likely mean, best first: what the same words were given before, then what growers call it, then
 * what its name is like.
 * @param before words that were given a code already.
 */
export function suggestCodes(
	words: string,
	codes: readonly Code[],
	before: readonly { words: string; codes: string[] }[] = [],
): string[] {
	const plain = plainText(words);
	const told = new Set(plain.split(" "));
	const same = new Set(before.filter((one) => plainText(one.words) === plain).flatMap((one) => one.codes));
	const scored = codes.map(({ key, text }) => {
		const calls = (spoken[key] ?? []).filter((call) => (call.includes(" ") ? plain.includes(call) : told.has(call)));
		const like = Math.max(...[text.en, text.es].map((name) => nameLikeness(plain, told, plainText(name))));
		return { key, score: (same.has(key) ? 10 : 0) + (calls.length > 0 ? 2 + calls.length : 0) + like };
	});
	return scored
		.filter(({ score }) => score >= leastScore)
		.toSorted((a, b) => b.score - a.score)
		.slice(0, mostSuggested)
		.map(({ key }) => key);
}

/** A word of the name that was told, one letter off at most in five, or the whole name nearly as it is. */
const leastScore = 0.75;

function nameLikeness(plain: string, told: ReadonlySet<string>, name: string): number {
	const longWords = name.split(" ").filter((word) => word.length >= 4);
	const best = longWords.map((word) => Math.max(0, ...[...told].map((one) => likeness(one, word))));
	return Math.max(likeness(plain, name), 0, ...best.map((like) => (like >= 0.8 ? like : 0)));
}

import { z } from "zod";
import { parseTypedNumber } from "#app/collect/typed-number.ts";
import { cleanText } from "#app/collect/typed-text.ts";
import { isUnitOf, toCanonical } from "#app/collect/units.ts";
import { cropKeys } from "#app/directory/crops.ts";
import { type Problem, problemMessage } from "#app/lib/parse-form.ts";

/** Far more than any orchard has, and what a slip of the finger makes of a number. */
const mostPlants = 1_000_000;
const mostAcres = 100_000;

type Told = Omit<Problem, "field">;
const numberProblems = {
	negative: "negative",
	not_a_number: "not_a_number",
	number_unclear: "ambiguous_number",
	unit_unclear: "unit_unknown",
	unit_not_known: "unit_unknown",
	too_long: "too_long",
} as const;

/** A box that holds a number: what it comes to, or what is to be mended. */
function typed(read: (text: string) => number | Told) {
	return z.string({ error: "empty" }).transform((text, context) => {
		const told = read(text);
		if (typeof told === "number") return told;
		context.addIssue({ code: "custom", message: problemMessage(told) });
		return z.NEVER;
	});
}

function readPlants(text: string, language: string): number | Told {
	const read = parseTypedNumber(text, language);
	if (!read.ok) return { code: numberProblems[read.code] };
	if (read.unit !== null && read.unit !== "plants") return { code: "unit_unknown" };
	if (!Number.isInteger(read.value)) return { code: "not_whole" };
	return read.value > mostPlants ? { code: "too_large_limit", detail: { max: mostPlants } } : read.value;
}

/** Acres, also where hectares were typed. An area of nothing is no area. */
function readAcres(text: string, language: string): number | Told {
	const read = parseTypedNumber(text, language);
	if (!read.ok) return { code: numberProblems[read.code] };
	const unit = read.unit ?? "acre";
	if (!isUnitOf("area", unit)) return { code: "unit_unknown" };
	const acres = toCanonical(read.value, unit, { bushelLb: null, crateLb: null });
	if (acres > mostAcres) return { code: "too_large_limit", detail: { max: mostAcres } };
	return acres > 0 ? acres : { code: "not_nothing" };
}

function readYear(text: string, thisYear: number): number | Told {
	const year = Number(/^\s*(\d{4})\s*$/.exec(text)?.[1]);
	if (!(year >= 1850)) return { code: "season_wrong" };
	return year > thisYear ? { code: "date_in_future" } : year;
}

/** What is told of a planting beside its crop, as typed in the grower's language. */
function plantingFacts(language: string, thisYear: number) {
	return z
		.object({
			cultivar: z
				.string()
				.max(2000, "too_long")
				.optional()
				.transform((text) => cleanText(text ?? "")),
			bearingTrees: typed((text) => readPlants(text, language)),
			youngTrees: typed((text) => readPlants(text, language))
				.optional()
				.transform((plants) => plants ?? 0),
			areaAcres: typed((text) => readAcres(text, language))
				.optional()
				.transform((acres) => acres ?? null),
			plantedYear: typed((text) => readYear(text, thisYear))
				.optional()
				.transform((year) => year ?? null),
		})
		.superRefine(({ cultivar, bearingTrees, youngTrees }, context) => {
			const issue = (path: string, told: Told) =>
				context.addIssue({ code: "custom", path: [path], message: problemMessage(told) });
			if ([...cultivar].length > 100) issue("cultivar", { code: "too_long_limit", detail: { max: 100 } });
			if (bearingTrees + youngTrees === 0) issue("bearingTrees", { code: "no_plants" });
		});
}

const crop = z.object({ cropKey: z.enum(cropKeys, { error: "choice_wrong" }) });

export const newPlantingForm = (language: string, thisYear: number) => crop.and(plantingFacts(language, thisYear));

/** Everything that can be done with one planting. */
export const plantingForm = (language: string, today: string) => {
	const facts = plantingFacts(language, Number(today.slice(0, 4)));
	return z.discriminatedUnion("step", [
		z.object({ step: z.literal("change"), whole: facts }),
		z.object({ step: z.literal("split"), first: facts, second: facts }),
		z.object({
			step: z.literal("pull_out"),
			removedOn: z
				.string({ error: "empty" })
				.refine(isDay, "date_wrong")
				.refine((day) => day <= today, "date_in_future"),
		}),
	]);
};
export type PlantingStep = z.infer<ReturnType<typeof plantingForm>>;

function isDay(text: string): boolean {
	return z.iso.date().safeParse(text).success && text >= "1850-01-01";
}

import { z } from "zod";
import { Words } from "#app/lib/words.ts";
import type { Condition as ConditionShape, ConditionValue } from "#app/lib/condition.ts";
import { faultsOf } from "./form-faults.ts";

export { Words };

const Key = z.string().regex(/^[a-z][a-z0-9_]*$/);

/** When a question is asked, from earlier answers; inside `any_planting`, `question` names the planting table's columns. */
export type Condition = ConditionShape;
export const Condition: z.ZodType<Condition> = z.lazy(() =>
	z.union([
		z.object({
			compare: z.enum(["<", "<=", "=", "!=", ">=", ">"]),
			question: Key,
			to: z.union([
				z.object({ value: z.union([z.number(), z.string()]) }),
				z.object({ question: Key, times: z.number().positive().optional() }),
			]),
		}),
		z.object({ all: z.array(Condition).min(1) }),
		z.object({ any: z.array(Condition).min(1) }),
		z.object({ not: Condition }),
		z.object({ any_planting: Condition }),
	]),
);

/** What to do while the answers do not decide a condition: it is asked, unless the form says to skip it. */
const WhenUnsure = z.enum(["ask", "skip"]).optional();
const questionBase = {
	key: Key,
	text: Words,
	/** What the answer is called in a sentence and in a narrow table, where `text` is a question. */
	label: Words.optional(),
	help: Words.optional(),
	required: z.boolean(),
	/** Only asked when this holds; what a condition hides is kept while editing and left out at submission. */
	condition: Condition.optional(),
	whenUnsure: WhenUnsure,
	/** A cell in which everybody gives one answer to a sensitive question is withheld. */
	sensitive: z.boolean().default(false),
};
const limits = z
	.object({ hardMin: z.number(), hardMax: z.number(), softMin: z.number(), softMax: z.number() })
	.partial()
	.optional();

export const Question = z.discriminatedUnion("type", [
	z.object({
		...questionBase,
		type: z.literal("number"),
		unitFamily: z.enum(["mass", "area", "temperature", "length", "trees", "count"]),
		limits,
		/**
		 * What is known of a planting is filled in, to be confirmed and not asked again: what was told in the newest earlier
		 * season, of bearing trees also what the list of plantings says, where it was changed since.
		 */
		prefill: z.enum(["bearing_trees", "last_season"]).optional(),
	}),
	z.object({ ...questionBase, type: z.literal("percent"), limits }),
	z.object({
		...questionBase,
		type: z.literal("date"),
		/** The date question of the same screen whose day this one must not come before. */
		notBefore: Key.optional(),
	}),
	z.object({
		...questionBase,
		type: z.literal("choice"),
		options: z.array(z.object({ key: Key, text: Words })).min(2),
	}),
	z.object({
		...questionBase,
		type: z.literal("several"),
		/** An option that is `alone`, such as "none of these", goes with no other; one with `crops` is offered for those only. */
		options: z
			.array(z.object({ key: Key, text: Words, alone: z.boolean().optional(), crops: z.array(Key).optional() }))
			.min(2),
	}),
	z.object({
		...questionBase,
		type: z.literal("rating"),
		/** `score` is what a measure counts an option as; either all options have one or none. */
		options: z.array(z.object({ key: Key, text: Words, score: z.number().optional() })).min(2),
	}),
	z.object({
		...questionBase,
		type: z.literal("short_text"),
		maxLength: z.number().int().default(200),
		/**
		 * What the words are counted as once an associate has given them a code: the share told for `moves` goes to one of `to`,
		 * or options of the question `adds` are counted as chosen.
		 */
		codes: z.union([z.object({ moves: Key, to: z.array(Key).min(1) }), z.object({ adds: Key })]).optional(),
	}),
	z.object({ ...questionBase, type: z.literal("long_text"), maxLength: z.number().int().default(5000) }),
	/** Up to five pictures, of the whole operation: each is kept when it arrives, so that it stands alone on its screen. */
	z.object({ ...questionBase, type: z.literal("photo"), required: z.literal(false) }),
]);
export type Question = z.infer<typeof Question>;

/** A rule on answers, beside one question. A hard one must be met; a soft one asks once whether the answers are right. */
const Check = z.object({
	key: Key,
	kind: z.enum(["hard", "soft"]),
	/** True where the answers are odd; what is not known raises nothing. */
	when: Condition,
	/** A question of the screen that `when` speaks of. */
	question: Key,
	message: Words,
});
export type Check = z.infer<typeof Check>;

/** One screen of the survey: either questions asked once, or the planting table, which takes one screen a planting. */
export const Screen = z.object({
	key: Key,
	title: Words,
	help: Words.optional(),
	/** true: the questions below are the columns of the planting table, asked once for each planting. */
	perPlanting: z.boolean(),
	questions: z.array(Question).min(1),
	/** Percent questions of this screen that must add up to a hundred. */
	sumToHundred: z.array(Key).optional(),
	checks: z.array(Check).optional(),
	condition: Condition.optional(),
	whenUnsure: WhenUnsure,
});
export type Screen = z.infer<typeof Screen>;

/** A percent or scored question, or how many percent one number is of another. */
const Share = z.union([Key, z.object({ part: Key, whole: Key })]);
export type Share = z.infer<typeof Share>;
const weights = { times: z.number(), share: Share.optional() };
/** A question's number, or what the directory knew of each planting when the answers were sent in. */
const Term = z.union([
	z.object({ question: Key, ...weights }),
	z.object({ known: z.literal("bearing_trees"), ...weights }),
]);
export type Term = z.infer<typeof Term>;
/**
 * Σ times · number (· share/100): a linear form of an operation's answers over its plantings of the crop. A share that each
 * planting has weighs that planting's own number.
 */
const LinearForm = z.object({
	terms: z.array(Term).min(1),
	/** The form's least value: 0 where a gain in one crop must not count as a negative loss to a cause. */
	atLeast: z.number().optional(),
});
/** 1 for an operation where the condition holds for its sums, else 0. */
const Indicator = z.object({ indicator: Condition });
const One = z.object({ one: z.literal(true) });
/** The day of the year that a date question tells, 1 to 366: of the crop's plantings the earliest, unless the latest is taken. */
const DayOfYear = z.object({ day: Key, take: z.enum(["earliest", "latest"]).optional() });
export const Quantity = z.union([LinearForm, Indicator, One, DayOfYear]);
export type Quantity = z.infer<typeof Quantity>;

/** The kept unit of a measure's questions, or what one is told in; `count` is a bare number, `day` one of the year. */
export const MeasureUnit = z.enum([
	"percent",
	"percent_of_normal",
	"lb_per_tree",
	"lb",
	"trees",
	"operations",
	"score",
	"acres",
	"fahrenheit",
	"row_feet",
	"count",
	"day",
]);

/** What a survey estimates, declared as data: a new measure needs no code. */
export const Measure = z.object({
	key: z.string().regex(/^[a-z][a-z0-9_]*(\.[a-z0-9_]+)?$/),
	/** `day`: median and quartiles of a day of the year. */
	kind: z.enum(["ratio", "mean", "total", "proportion", "day"]),
	label: Words,
	description: Words,
	unit: MeasureUnit,
	decimals: z.number().int().min(0).max(6),
	/** Which direction is bad news, if any; maps and tables say it in words, never by colour alone. */
	worse: z.enum(["more", "less"]).nullable(),
	hue: z.enum(["loss", "bloom", "pests", "cold", "yield"]),
	numerator: Quantity,
	/** Null for totals; `{one: true}` for means and proportions. */
	denominator: Quantity.nullable(),
	/** Shown value = estimate × scale: 100 for a share told in percent. */
	scale: z.number(),
	/** Whether sums over all crops mean something. */
	acrossCrops: z.boolean(),
	/** The crops that it is told of, where a form asks something of some crops only. */
	crops: z.array(Key).optional(),
	/**
	 * A base quantity of the protection table, with a key that begins with "base.": estimated for protection, not published
	 * as a measure. What the form's measures are made of should be among them.
	 */
	base: z.boolean().default(false),
	/** The base quantities that it is made of, without their "base.": what its cells are withheld by. */
	protects: z.array(Key).optional(),
});
export type Measure = z.infer<typeof Measure>;

export const FormDefinition = z
	.object({
		key: Key,
		title: Words,
		minutes: z.number().int().min(1),
		screens: z.array(Screen).min(1),
		measures: z.array(Measure).min(1),
	})
	.superRefine((form, context) => {
		for (const { path, message } of faultsOf(form)) context.addIssue({ code: "custom", path, message });
	});
export type FormDefinition = z.infer<typeof FormDefinition>;

/** A check that was confirmed and the values that it asked about: what changes is asked about again. */
export type Confirmation = { check: string; values: (ConditionValue | null | (ConditionValue | null)[])[] };

/**
 * One answer as stored. `value` is canonical (pounds, acres, degrees Fahrenheit, feet, plants, percent, ISO date, option
 * key, text); `given` keeps what was typed and its unit, with the weight of a crate where that is the unit. Don't know and
 * refused have no value; a question not asked has no answer at all; zero is a value.
 */
export type Answer = {
	questionKey: string;
	plantingId: string | null;
	kind: "given" | "dont_know" | "refused";
	value: number | string | string[] | null;
	given: { text: string; unit?: string; crateLb?: number } | null;
	/** Soft checks that the grower confirmed, left out where there is none. */
	confirmed?: Confirmation[];
};

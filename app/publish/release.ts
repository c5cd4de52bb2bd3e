import { z } from "zod";
import type { FigureShape } from "#app/lib/format.ts";
import { Words } from "#app/lib/words.ts";

/** The settings that a release was made with, as frozen in it. A setting that is not used, or that an older release did not record, is absent. */
const Rules = z
	.object({
		minimumOwners: z.number(),
		dominancePercent: z.number(),
		steadyCv: z.number(),
		careCv: z.number(),
		steadyDays: z.number(),
		careDays: z.number(),
		largest: z.object({ owners: z.number(), percent: z.number() }).nullable(),
		publicFactor: z.number().nullable(),
	})
	.partial()
	.transform(({ largest, publicFactor, ...rules }) => ({
		...rules,
		/** So many of the largest owners may not have more than this share together. */
		...(largest && { largestOwners: largest.owners, largestPercent: largest.percent }),
		/** How closely anybody is taken to know an amount from what can be seen, as a factor. */
		...(typeof publicFactor === "number" && { publicFactor }),
	}));
const Counted = z.object({ asked: z.number(), answered: z.number() });
const Method = z
	.object({
		openedAt: z.string(),
		closedAt: z.string(),
		all: Counted,
		states: z.array(Counted.extend({ stateFips: z.string() })),
		setAside: z.number(),
		/** By which weights the figures were made; releases before there was a choice do not say. */
		weighting: z.enum(["design", "post_stratified", "raked", "linear"]),
		/** How far calibrated weights went, over all crops, states and measures. */
		calibration: z.object({
			parts: z.number(),
			designKept: z.number(),
			mostSweeps: z.number(),
			smallest: z.number(),
			largest: z.number(),
		}),
	})
	.partial();

export type Release = {
	releaseId: string;
	number: number;
	season: number;
	formKey: string;
	title: Words;
	/** ISO moment. */
	publishedAt: string;
	rules: z.infer<typeof Rules>;
	method: z.infer<typeof Method>;
	codeVersion: string;
	checksum: string;
	/** 1 for a survey's first, then rising: each edition replaces the one before it. */
	edition: number;
	/** All editions of one survey have it in common. */
	seriesId: string;
	/** Why this edition replaced the one before it; null for the first. */
	revisionReason: Words | null;
	/** Number of the release that replaced this one. */
	replacedBy: number | null;
	/** When and why its figures were withdrawn: they are served to nobody any more. */
	withdrawn: { at: string; reason: Words } | null;
};

/** Whether its figures are those that hold: neither replaced by a revision nor withdrawn. */
export const isStanding = ({ replacedBy, withdrawn }: Pick<Release, "replacedBy" | "withdrawn">): boolean =>
	replacedBy === null && withdrawn === null;

export type ReleaseMeasure = FigureShape & {
	key: string;
	label: Words;
	description: Words;
	kind: "ratio" | "mean" | "total" | "proportion" | "day";
	worse: "more" | "less" | null;
	hue: Hue;
};
export const hues = ["loss", "bloom", "pests", "cold", "yield"] as const;
export type Hue = (typeof hues)[number];

export type ReleaseArea = {
	key: string;
	kind: "county" | "district" | "state" | "region";
	name: string;
	parentKey: string | null;
	stateFips: string | null;
};

/** Reads a stored pair of texts. @throws when the release holds something else, which its writer prevents. */
export const toWords = (stored: unknown): Words => Words.parse(stored);
export const toRules = (stored: unknown): Release["rules"] => Rules.parse(stored);
export const toMethod = (stored: unknown): Release["method"] => Method.parse(stored);
export const toHue = (stored: string): Hue => hues.find((hue) => hue === stored) ?? "loss";

import { z } from "zod";
import { areaKinds } from "../cell.ts";
import { observationStatuses } from "../data-file.ts";
import { mostRows, mostValues } from "./limits.ts";

const usualRows = 1_000;

/** Example of a value, for the reference page and for who sent something else. */
const code = (pattern: RegExp, example: string) =>
	z
		.string()
		.regex(pattern)
		.meta({ examples: [example] });
/** Digits and nothing else, so that no other way of writing a number makes a second address of the same. */
const whole = (least: number, most: number) =>
	z.preprocess(
		(text) => (typeof text === "string" ? (/^(0|[1-9]\d{0,9})$/.test(text) ? Number(text) : Number.NaN) : text),
		z.number().int().min(least).max(most),
	);
const several = <S extends z.ZodType>(one: S) => z.array(one).min(1).max(mostValues).optional();

const measure = code(/^[a-z][a-z0-9_.]{0,79}$/, "crop_loss");
const crop = code(/^[a-z][a-z_]{0,39}$/, "apple");
const area = code(/^[A-Za-z0-9][A-Za-z0-9_-]{0,59}$/, "19103");
const state = code(/^\d{2}$/, "19");

const paging = {
	limit: whole(1, mostRows)
		.default(usualRows)
		.meta({ examples: [100] }),
	cursor: z
		.string()
		.regex(/^[\w-]{1,1500}\.[\w-]{16}$/)
		.optional(),
};

export const path = {
	release: whole(1, 2_147_483_647).meta({ examples: [1] }),
	file: code(/^[A-Za-z0-9][A-Za-z0-9._-]{0,99}$/, "cells.csv"),
};

/** What each list can be asked for. One schema both checks a request and describes it in the OpenAPI document. */
export const queries = {
	none: z.strictObject({}),
	releases: z.strictObject({
		season: several(whole(1900, 9999).meta({ examples: [2025] })),
		state: several(z.enum(["current", "replaced", "withdrawn"])),
		...paging,
	}),
	areas: z.strictObject({ kind: several(z.enum(areaKinds)), state: several(state), ...paging }),
	geometry: z.strictObject({ kind: z.enum(areaKinds).default("county"), state: several(state) }),
	cells: z.strictObject({
		measure: several(measure),
		crop: several(crop),
		area: several(area),
		kind: several(z.enum(areaKinds)),
		state: several(state),
		status: several(z.enum(observationStatuses)),
		...paging,
	}),
};
export type CellsQuery = z.infer<typeof queries.cells>;

import { z } from "zod";
import { problemMessage } from "./parse-form.ts";

/** A number as typed, with a point or a comma before its decimals. */
export const numberField = (least: number, most: number, whole = false) =>
	z.preprocess(
		(sent) => (typeof sent === "string" ? Number(sent.trim().replace(",", ".") || "empty") : sent),
		z
			.number({ error: "not_a_number" })
			.refine((value) => !whole || Number.isInteger(value), "not_whole")
			.refine((value) => value >= least, problemMessage({ code: "too_small_limit", detail: { min: least } }))
			.refine((value) => value <= most, problemMessage({ code: "too_large_limit", detail: { max: most } })),
	);

/** A field that may be left empty. */
export const optionalField = <T extends z.ZodType>(of: T) =>
	z.preprocess((sent) => (typeof sent === "string" && sent.trim() === "" ? undefined : sent), of.optional());

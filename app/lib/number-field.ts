import { z } from "zod";
import { problemMessage } from "./parse-form.ts";

/** A whole number in groups of three digits, as tables show it. */
const inGroups = /^\d{1,3}(?:[.,\s]\d{3})+$/;

/** A number as typed, with a point or a comma before its decimals; whole ones also as "1,000". */
export const numberField = (least: number, most: number, whole = false) =>
	z.preprocess(
		(sent) => (typeof sent === "string" ? readTyped(sent.trim(), whole) : sent),
		z
			.number({ error: "not_a_number" })
			.refine((value) => !whole || Number.isInteger(value), "not_whole")
			.refine((value) => value >= least, problemMessage({ code: "too_small_limit", detail: { min: least } }))
			.refine((value) => value <= most, problemMessage({ code: "too_large_limit", detail: { max: most } })),
	);

function readTyped(text: string, whole: boolean): number {
	const plain = whole && inGroups.test(text) ? text.replaceAll(/\D/g, "") : text.replace(",", ".");
	return Number(plain || "empty");
}

/** A field that may be left empty. */
export const optionalField = <T extends z.ZodType>(of: T) =>
	z.preprocess((sent) => (typeof sent === "string" && sent.trim() === "" ? undefined : sent), of.optional());

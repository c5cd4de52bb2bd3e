import { z } from "zod";
import type { Pin } from "#app/lib/geography/pin.ts";

/**
 * Degrees as maps and telephones write them: "-93.6319", "93,6319", "93.6319° W". West and south are below 0, by sign or
 * by letter (O for the Spanish oeste).
 * @returns null for what cannot be read, or lies off the globe.
 */
export function readDegrees(typed: string, kind: "latitude" | "longitude"): number | null {
	const letters = kind === "latitude" ? "NS" : "EWO";
	const pattern = new RegExp(`^([-−–+]?) ?(\\d{1,3}(?:[.,]\\d{1,12})?) ?°? ?([${letters}]?)$`, "i");
	const [, sign = "", figures, letter = ""] = pattern.exec(typed.trim()) ?? [];
	if (figures === undefined) return null;
	const isBelow = /[-−–]/.test(sign);
	// "-93 W" says it twice; "-93 E" contradicts itself.
	if (isBelow && /[NE]/i.test(letter)) return null;
	const size = Number(figures.replace(",", "."));
	if (size > (kind === "latitude" ? 90 : 180)) return null;
	return isBelow || /[SWO]/i.test(letter) ? -size : size;
}

/** A pin of two boxes, or null while one of them does not read as degrees. */
export function readPin(latitude: string, longitude: string): Pin | null {
	const [north, east] = [readDegrees(latitude, "latitude"), readDegrees(longitude, "longitude")];
	return north === null || east === null ? null : { latitude: north, longitude: east };
}

const wrong = { latitude: "latitude_wrong", longitude: "longitude_wrong" } as const;

const degrees = (kind: "latitude" | "longitude") =>
	z
		.string({ error: "empty" })
		.max(60, wrong[kind])
		.transform((typed, context) => {
			const read = readDegrees(typed, kind);
			if (read !== null) return read;
			context.addIssue({ code: "custom", message: wrong[kind] });
			return z.NEVER;
		});
/** Set by the button under what follows from another county. */
const confirmed = z.literal("yes").optional().catch(undefined);

/** How a grower tells where the operation lies. */
export const PlaceForm = z.discriminatedUnion("step", [
	z.object({ step: z.literal("pin"), latitude: degrees("latitude"), longitude: degrees("longitude"), confirmed }),
	z.object({
		step: z.literal("county"),
		countyFips: z.string({ error: "choice_wrong" }).regex(/^\d{5}$/, "choice_wrong"),
		confirmed,
	}),
	z.object({ step: z.literal("remove_pin") }),
]);
export type PlaceForm = z.infer<typeof PlaceForm>;

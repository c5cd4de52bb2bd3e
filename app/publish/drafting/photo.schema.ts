import { z } from "zod";
import { photoReasons } from "../report-photo.ts";

/** Who gave consent to showing a photo, when, and that the one who adds it has it from them. */
export const PhotoConsent = z.object({
	consentOf: z.string({ error: "empty" }).trim().min(1, "empty").max(200, "too_long"),
	consentOn: z
		.string({ error: "empty" })
		.pipe(z.iso.date("date_wrong"))
		.refine((day) => day <= new Date(Date.now() + 14 * 3_600_000).toISOString().slice(0, 10), "date_in_future"),
	consentGiven: z.literal("on", "agreement_needed"),
});
export type PhotoConsent = z.infer<typeof PhotoConsent>;

/** Why a photo is taken away again. */
export const PhotoTakeAway = z.object({ because: z.enum(photoReasons, "choice_wrong") });

import { z } from "zod";
import { typedClock, typedDay } from "#app/lib/typed-moment.ts";

const text = (most: number) => z.string({ error: "empty" }).trim().min(1, "empty").max(most, "too_long");

/** Why figures were revised or withdrawn, as the public reads it. */
export const ReasonForm = z.object({ reasonEn: text(600), reasonEs: text(600) });

/** What a coordinator decides about a draft or a release, as the page sends it. */
export const Decision = z.discriminatedUnion("decision", [
	z.object({ decision: z.literal("publish") }),
	z.object({
		decision: z.literal("schedule"),
		publishOn: text(10).regex(typedDay, "date_wrong"),
		publishAt: text(5).regex(typedClock, "time_wrong"),
	}),
	z.object({ decision: z.literal("unschedule") }),
	z.object({ decision: z.literal("reject"), note: text(2000) }),
	ReasonForm.extend({ decision: z.literal("withdraw") }),
]);
export type Decision = z.infer<typeof Decision>;

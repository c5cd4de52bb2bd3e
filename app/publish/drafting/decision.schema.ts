import { z } from "zod";
import { typedClock, typedDay } from "#app/lib/typed-moment.ts";

const text = (most: number) => z.string({ error: "empty" }).trim().min(1, "empty").max(most, "too_long");

/** What the second person does with a report, as the page sends it. */
export const ReportDecision = z.discriminatedUnion("intent", [
	z.object({ intent: z.literal("publish") }),
	z.object({
		intent: z.literal("schedule"),
		publishOn: text(10).regex(typedDay, "date_wrong"),
		publishAt: text(5).regex(typedClock, "time_wrong"),
	}),
	z.object({ intent: z.literal("unschedule") }),
	z.object({ intent: z.literal("send_back"), note: text(4000) }),
]);
export type ReportDecision = z.infer<typeof ReportDecision>;

/** A comment on a report or one block of it, and its being dealt with. */
export const CommentForm = z.discriminatedUnion("intent", [
	z.object({
		intent: z.literal("comment"),
		comment: text(4000),
		block: z
			.string()
			.regex(/^[a-z0-9]{1,24}$/)
			.nullable()
			.catch(null)
			.default(null),
	}),
	z.object({ intent: z.literal("resolve"), commentId: z.string() }),
]);

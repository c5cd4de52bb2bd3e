import { z } from "zod";
import { besideParts } from "#app/lib/page-by-key.ts";
import { checkKinds } from "./odd-answers.ts";

/** How a finding ended: by an associate, or by itself as the answer or its neighbours changed. */
export const findingEnds = ["confirmed", "corrected", "set_aside", "answer_changed", "not_odd"] as const;
export const openStates = ["all", "asked", "said_right", "said_wrong", "confirmed_by_grower"] as const;
export const findingSorts = ["effect", "grower", "county", "kind", "made"] as const;

/** `?show=&kind=&crop=&county=&district=&state=&sort=&direction=&after=&before=` of the queue. What is wrong falls back. */
export const FindingsQuery = z.object({
	show: z.enum(["open", "ended"]).catch("open"),
	kind: z.enum(["all", ...checkKinds]).catch("all"),
	crop: z
		.string()
		.regex(/^[a-z_]{1,40}$/)
		.catch("all"),
	/** A county's, district's or state's key. */
	area: z
		.string()
		.regex(/^[\w-]{1,40}$/)
		.catch("all"),
	state: z.enum([...openStates, ...findingEnds]).catch("all"),
	sort: z.enum(findingSorts).catch("effect"),
	direction: z.enum(["asc", "desc"]).catch("desc"),
	...besideParts,
	/** What was just confirmed at once, to be undone at once. */
	batch: z.guid().nullable().catch(null),
});
export type FindingsQuery = z.infer<typeof FindingsQuery>;

const version = z.coerce.number().int().min(0);
const words = z.string().trim().max(2000).default("");
const reason = z.string({ error: "empty" }).trim().min(1, "empty").max(2000);
/** Which of the answers that a finding is about. */
const at = z.coerce.number().int().min(0).max(50).default(0);
/** The newest decision about that answer that the page knew of; 0 for none. */
const seen = z.coerce.number().int().min(0).default(0);

/** What an associate does with a finding. The answer of a correction stands in fields of its own, by its question. */
export const Decision = z.discriminatedUnion("act", [
	z.object({ act: z.literal("confirm"), version, words }),
	z.object({ act: z.literal("correct"), version, at, seen, reason }),
	z.object({ act: z.literal("preview"), version, at, seen, reason: words }),
	z.object({ act: z.literal("set_aside"), version, at, seen, reason }),
	z.object({ act: z.literal("reopen"), version }),
	z.object({ act: z.literal("ask"), version }),
]);
export type Decision = z.infer<typeof Decision>;

/** Confirms chosen findings at once, or takes that back. */
export const BulkDecision = z.discriminatedUnion("act", [
	z.object({ act: z.literal("confirm"), chosen: z.array(z.guid()).max(500).default([]) }),
	z.object({ act: z.literal("undo"), batch: z.guid() }),
	z.object({ act: z.literal("check_again") }),
]);
export type BulkDecision = z.infer<typeof BulkDecision>;

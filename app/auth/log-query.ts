import { z } from "zod";
import { logActions, logSubjects } from "./log-actions.ts";

const allActions = logSubjects.flatMap((subject) => logActions[subject].map((verb) => `${subject}.${verb}`));
const shown = new Set<string>(["all", ...logSubjects, ...allActions]);

/** Who did something where nobody was signed in. */
export const byLink = "link";

const day = z.iso.date().or(z.literal("")).catch("");
const eventId = z.coerce.number().int().positive().max(Number.MAX_SAFE_INTEGER).optional().catch(undefined);

/**
 * What the log is asked for, in its address. A wrong or missing part falls back; nothing typed is an error. Days are on the
 * network's clock and `to` is the last one. `older` and `newer` name the event beside which a page begins.
 */
export const LogQuery = z.object({
	q: z.string().trim().max(200).catch(""),
	show: z
		.string()
		.refine((show) => shown.has(show))
		.catch("all"),
	who: z.uuid().or(z.literal(byLink)).or(z.literal("")).catch(""),
	survey: z.guid().or(z.literal("")).catch(""),
	from: day,
	to: day,
	older: eventId,
	newer: eventId,
});
export type LogQuery = z.infer<typeof LogQuery>;

/** The parts of an address that a filter stands in, without those that say nothing. */
export function logFilters({ older: _older, newer: _newer, show, ...rest }: LogQuery): URLSearchParams {
	const parts = Object.entries({ ...rest, show: show === "all" ? "" : show });
	return new URLSearchParams(parts.filter(([, value]) => value !== ""));
}

import { z } from "zod";
import { besideParts } from "#app/lib/page-by-key.ts";
import { logActions, logSubjects } from "./log-actions.ts";

const allActions = logSubjects.flatMap((subject) => logActions[subject].map((verb) => `${subject}.${verb}`));
const shown = new Set<string>(["all", ...logSubjects, ...allActions]);

/** Who did something where nobody was signed in. */
export const byLink = "link";

const day = z.iso.date().or(z.literal("")).catch("");

/**
 * What the log is asked for, in its address. A wrong or missing part falls back; nothing typed is an error. Days are on the
 * network's clock and `to` is the last one.
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
	...besideParts,
});
export type LogQuery = z.infer<typeof LogQuery>;

/** The parts of an address that a filter stands in, without those that say nothing. */
export function logFilters({ after: _after, before: _before, show, ...rest }: LogQuery): URLSearchParams {
	const parts = Object.entries({ ...rest, show: show === "all" ? "" : show });
	return new URLSearchParams(parts.filter(([, value]) => value !== ""));
}

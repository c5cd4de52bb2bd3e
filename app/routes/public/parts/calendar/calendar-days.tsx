import type { ReactNode } from "react";
import { StatusBadge } from "#app/components/status-badge.tsx";
import { useFormat } from "#app/i18n/use-format.ts";
import { groupBy } from "#app/lib/group-by.ts";

export type CalendarEntry = {
	/** ISO moment. */
	at: string;
	kind: "survey_closes" | "release" | "report" | "out" | "told" | "withdrawn";
	/** The kind in a word or two. */
	word: string;
	what: ReactNode;
};

const tones = {
	survey_closes: "neutral",
	release: "attention",
	report: "attention",
	out: "good",
	told: "good",
	withdrawn: "stop",
} as const;

/** Entries under the day on which each falls by the given clock, in the order they come in. */
export function CalendarDays({ entries, zone }: { entries: CalendarEntry[]; zone: string | undefined }) {
	const format = useFormat();
	const days = [...groupBy(entries, ({ at }) => format.dayOf(at, zone))];
	return (
		<ol className="list-none">
			{days.map(([day, of]) => (
				<li key={day} className="break-inside-avoid border-t border-rule py-4 first:border-t-0 first:pt-0">
					<h3 className="text-base">{day}</h3>
					<ul className="mt-2 list-none space-y-2">
						{of.map((entry) => (
							<li
								key={`${entry.kind}${entry.at}${entry.word}`}
								className="grid gap-x-4 gap-y-1 sm:grid-cols-[11rem_minmax(0,1fr)]"
							>
								<span className="flex flex-wrap items-center gap-x-3 gap-y-1 text-sm text-quiet">
									<StatusBadge tone={tones[entry.kind]}>{entry.word}</StatusBadge>
									<time dateTime={entry.at}>{format.timeOf(entry.at, zone)}</time>
								</span>
								<span className="min-w-0">{entry.what}</span>
							</li>
						))}
					</ul>
				</li>
			))}
		</ol>
	);
}

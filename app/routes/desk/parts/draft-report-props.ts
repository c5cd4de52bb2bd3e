import type { DraftReportProps } from "#app/components/release/draft-report.tsx";
import type { DraftView } from "#app/release/draft-view.server.ts";

/** What the reviewers' page needs of a computed draft; null while a job still works on it. */
export function draftReportProps({ draft, ...view }: DraftView): DraftReportProps | null {
	if (!draft.method || !draft.audit) return null;
	const { all, setAside, joins, weighting, calibrations } = draft.method;
	return {
		...view,
		measures: view.measures.map((measure) => ({ ...measure, season: draft.season })),
		audit: draft.audit,
		rules: draft.rules,
		asked: all.asked,
		answered: all.answered,
		setAside,
		weighting,
		calibrations,
		joinCount: new Set(joins.map((join) => join.stratumKeys.join(" "))).size,
		checksum: draft.checksum,
	};
}

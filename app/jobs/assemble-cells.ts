import type { AreaEstimate } from "#app/estimate/survey.ts";
import { groupBy } from "#app/lib/group-by.ts";
import type { OwnerShares } from "#app/protect/owner-shares.ts";
import { cellKey, type Protection } from "#app/protect/protect.ts";
import type { DraftCell, DraftFigure, ReleaseMethod } from "#app/release/draft.ts";

/**
 * The cells of a draft: every crop, and all crops together, in every area. Only shown cells get a count and figures.
 * A cell whose growers were asked and did not answer is withheld like any other with too few: `no_growers` would be
 * untrue, and a word of its own would tell that nobody answered.
 * @param frameCells counties and crops (`area|crop`) with growers in the frame.
 */
export function assembleCells(input: {
	method: Pick<ReleaseMethod, "areas" | "cropKeys" | "measures">;
	frameCells: ReadonlySet<string>;
	shares: readonly OwnerShares[];
	protection: Protection;
	estimates: readonly AreaEstimate[];
}): DraftCell[] {
	const { method, protection } = input;
	const asked = askedAreas(method.areas, input.frameCells);
	const shareOf = new Map(input.shares.map((share) => [cellKey(share.areaKey, share.cropKey), share]));
	const estimatesOf = groupBy(input.estimates, (estimate) => cellKey(estimate.areaKey, estimate.cropKey));
	return method.areas.flatMap(({ areaKey }) =>
		[...method.cropKeys, "all"].map((cropKey): DraftCell => {
			const key = cellKey(areaKey, cropKey);
			const decision = protection.pattern.get(key);
			const hidden = { cropKey, areaKey, respondents: null, figures: null };
			if (!decision || decision.status === "no_growers") {
				return asked.has(key)
					? { ...hidden, status: "withheld", reasons: ["nobody_answered"] }
					: { ...hidden, status: "no_growers", reasons: [] };
			}
			if (decision.status === "withheld") return { ...hidden, status: "withheld", reasons: [...decision.reasons] };
			const figures = (estimatesOf.get(key) ?? []).map(toFigure);
			const respondents = shareOf.get(key)?.quantities.respondents?.total ?? 0;
			return { cropKey, areaKey, status: "shown", reasons: [], respondents, figures };
		}),
	);
}

function toFigure(estimate: AreaEstimate): DraftFigure {
	const { measureKey, value, standardError, cv, lower, upper, quartiles } = estimate;
	// A value without a standard error, or no value at all, cannot be leant on.
	const steadiness = value === null || standardError === null ? "rough" : estimate.steadiness;
	return { measureKey, value, standardError, cv, lower, upper, steadiness, ...(quartiles && { quartiles }) };
}

/** Frame cells of counties, carried up to every area that holds them. */
function askedAreas(areas: ReleaseMethod["areas"], frameCells: ReadonlySet<string>): Set<string> {
	const parentOf = new Map(areas.map((area) => [area.areaKey, area.parentKey]));
	const asked = new Set<string>();
	for (const key of frameCells) {
		const [county = "", cropKey = ""] = key.split("|");
		for (let area: string | null | undefined = county; area; area = parentOf.get(area))
			asked.add(cellKey(area, cropKey));
	}
	return asked;
}

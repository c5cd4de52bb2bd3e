import { useTranslation } from "react-i18next";
import { DescriptionList } from "#app/components/description-list.tsx";
import { useFormat } from "#app/i18n/use-format.ts";
import type { CellStatus } from "#app/publish/cell.ts";
import type { Release } from "#app/publish/release.ts";

type Counts = Record<CellStatus, number>;
type FactsProps = { release: Release; counties: Counts; districts: Counts; band: string | null; places: string[] };

/** What was asked, when, where and of how many, and by which rules figures were kept back. */
export function ReleaseFacts({ release, counties, districts, band, places }: FactsProps) {
	const { t } = useTranslation("public");
	const format = useFormat();
	const { rules, method } = release;
	const percent = (fraction: number) => format.quantity(fraction * 100, "percent");
	const counted = (counts: Counts) =>
		t("data.one.counted", {
			shown: format.number(counts.shown),
			withheld: format.number(counts.withheld),
			noGrowers: format.number(counts.no_growers),
		});
	const items = [
		{ term: t("data.published"), detail: format.moment(release.publishedAt) },
		method.openedAt &&
			method.closedAt && {
				term: t("data.one.asked"),
				detail: t("data.one.askedFromTo", { from: format.dayOf(method.openedAt), to: format.dayOf(method.closedAt) }),
			},
		places.length > 0 && { term: t("data.where"), detail: format.list(places) },
		band !== null && { term: t("data.band"), detail: band },
		method.all && {
			term: t("data.answered"),
			detail: t("data.one.answeredOf", {
				answered: format.number(method.all.answered),
				asked: format.number(method.all.asked),
			}),
		},
		...(method.states ?? []).map(({ stateFips, asked, answered }) => ({
			term: t("data.one.answeredIn", { state: t(`common:state.${stateFips}`) }),
			detail: t("data.one.answeredOf", { answered: format.number(answered), asked: format.number(asked) }),
		})),
		!release.withdrawn && { term: t("data.one.countyCells"), detail: counted(counties) },
		!release.withdrawn && { term: t("data.one.districtCells"), detail: counted(districts) },
		method.weighting && { term: t("data.one.weights"), detail: t(`data.one.weightsOf.${method.weighting}`) },
		rules.minimumOwners && {
			term: t("data.one.minimum"),
			detail: t("data.one.minimumOwners", { count: rules.minimumOwners, value: format.number(rules.minimumOwners) }),
		},
		rules.dominancePercent && {
			term: t("data.one.dominance"),
			detail: t("data.one.dominanceRule", { percent: format.quantity(rules.dominancePercent, "percent") }),
		},
		rules.steadyCv &&
			rules.careCv && {
				term: t("data.one.cutOffs"),
				detail: t("data.one.cutOffsRule", { steady: percent(rules.steadyCv), care: percent(rules.careCv) }),
			},
		rules.steadyDays &&
			rules.careDays && {
				term: t("data.one.dayCutOffs"),
				detail: t("data.one.dayCutOffsRule", {
					steady: format.quantity(rules.steadyDays, "days"),
					care: format.quantity(rules.careDays, "days"),
				}),
			},
		{ term: t("data.one.codeVersion"), detail: release.codeVersion },
	];
	return <DescriptionList items={items.filter((item) => typeof item === "object")} />;
}

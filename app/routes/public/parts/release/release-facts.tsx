import { useTranslation } from "react-i18next";
import { DescriptionList } from "#app/components/description-list.tsx";
import { useFormat } from "#app/i18n/use-format.ts";
import { decimalsOf } from "#app/lib/format.ts";
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
	const rate = ({ asked, answered }: { asked: number; answered: number }) =>
		t("data.one.rate", {
			answered: format.number(answered),
			asked: format.number(asked),
			rate: percent(asked > 0 ? answered / asked : 0),
		});
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
			detail: rate(method.all),
		},
		...(method.states ?? []).map((state) => ({
			term: t("data.one.answeredIn", { state: t(`common:state.${state.stateFips}`) }),
			detail: rate(state),
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
		rules.largestOwners &&
			rules.largestPercent && {
				term: t("data.one.largest"),
				detail: t("data.one.largestRule", {
					owners: format.number(rules.largestOwners),
					percent: format.quantity(rules.largestPercent, "percent"),
				}),
			},
		rules.publicFactor && {
			term: t("data.one.publicFactor"),
			detail: t("data.one.publicFactorRule", {
				factor: format.number(rules.publicFactor, decimalsOf(rules.publicFactor)),
			}),
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
	return (
		<>
			<DescriptionList items={items.filter((item) => item !== null && typeof item === "object")} />
			{method.all && <p className="mt-3 max-w-prose text-sm text-quiet">{t("data.one.rateNote")}</p>}
		</>
	);
}

import { useTranslation } from "react-i18next";
import { ButtonLink } from "#app/components/button.tsx";
import { EmptyState } from "#app/components/empty-state.tsx";
import type { DrawnPicture } from "#app/components/map/static-map.tsx";
import { Section } from "#app/components/section.tsx";
import { useFormat } from "#app/i18n/use-format.ts";
import { DistrictLegend, DistrictMap, type Grouping } from "#app/components/districts/district-map.tsx";

type Judged = { picture: DrawnPicture; now: Grouping; proposed: Grouping };

/** Today's districts beside those proposed, or beside those typed. */
export function BeforeAndAfter({
	judged,
	preview,
	proposal,
}: {
	judged: Judged | null;
	preview: Grouping | null;
	proposal: string;
}) {
	const { t } = useTranslation("districts");
	if (!judged) return <EmptyState title={t("none.title")}>{t("none.body")}</EmptyState>;
	const { picture, now, proposed } = judged;
	const after = preview ?? proposed;
	return (
		<Section title={preview ? t("compare.yours") : t("compare.title")}>
			<div className="flex flex-col gap-6 md:flex-row">
				<DistrictMap picture={picture} grouping={now} title={t("compare.now")} />
				<DistrictMap
					picture={picture}
					grouping={after}
					title={preview ? t("compare.preview") : t("compare.proposed")}
				/>
			</div>
			<DistrictLegend />
			<Counts now={now} after={after} />
			<p className="mt-3 max-w-prose text-sm text-quiet">{t("compare.beforeShields")}</p>
			<p className="mt-4">
				<ButtonLink kind="secondary" to={proposal}>
					{t("use")}
				</ButtonLink>
			</p>
		</Section>
	);
}

function Counts({ now, after }: { now: Grouping; after: Grouping }) {
	const { t } = useTranslation("districts");
	const format = useFormat();
	const line = (grouping: Grouping) => ({
		counties: format.number(grouping.told.length),
		of: format.number(grouping.told.length + grouping.untold.length),
		districts: format.number(grouping.districts.length),
		shown: format.number(grouping.shown),
		withheld: format.number(grouping.withheld),
	});
	return (
		<ul className="mt-4 max-w-prose list-disc pl-5">
			<li>{t("compare.countNow", line(now))}</li>
			<li>{t("compare.countAfter", line(after))}</li>
		</ul>
	);
}

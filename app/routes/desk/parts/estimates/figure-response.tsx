import { useTranslation } from "react-i18next";
import { DataTable } from "#app/components/data-table.tsx";
import { DescriptionList } from "#app/components/description-list.tsx";
import { Section } from "#app/components/section.tsx";
import { rateKeys } from "#app/estimate/response-rate.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import type { ToldFigure } from "./figure-origin.server.ts";

/** Who of the area's growers of the crop answered, and who of them this question. */
export function FigureResponse({ told: { dispositions, response, origin } }: { told: ToldFigure }) {
	const { t } = useTranslation("release");
	const format = useFormat();
	const percent = (rate: number | null) =>
		rate === null ? t("estimates.absent") : format.quantity(rate * 100, "percent", 1);
	const { used, setAside, unanswered, rate } = origin.items;
	return (
		<>
			<Section title={t("origin.items.title")}>
				<DescriptionList
					items={[
						{ term: t("origin.items.used"), detail: format.number(used) },
						{ term: t("origin.items.setAside"), detail: format.number(setAside) },
						{ term: t("origin.items.unanswered"), detail: format.number(unanswered) },
						{ term: t("origin.items.rate"), detail: percent(rate) },
					]}
				/>
			</Section>
			<Section title={t("origin.response.title")}>
				<DataTable
					caption={t("origin.response.dispositions")}
					rows={dispositions}
					rowKey={(row) => row.disposition}
					columns={[
						{
							key: "disposition",
							header: t("origin.response.disposition"),
							cell: (row) => t(`common:disposition.${row.disposition}`),
						},
						{
							key: "operations",
							header: t("origin.response.operations"),
							numeric: true,
							cell: (row) => format.number(row.operations),
						},
						{
							key: "trees",
							header: t("origin.response.trees"),
							numeric: true,
							cell: (row) => format.number(row.bearingTrees),
						},
					]}
					empty={<p className="text-quiet">{t("origin.response.noFrame")}</p>}
				/>
				{dispositions.length > 0 && (
					<DataTable
						caption={t("origin.response.rates")}
						rows={[...rateKeys]}
						rowKey={(key) => key}
						columns={[
							{ key: "rate", header: t("origin.response.rate"), cell: (key) => t(`origin.response.${key}`) },
							{
								key: "counted",
								header: t("origin.response.operations"),
								numeric: true,
								cell: (key) => percent(response.counted[key]),
							},
							{
								key: "weighted",
								header: t("origin.response.trees"),
								numeric: true,
								cell: (key) => percent(response.weighted[key]),
							},
						]}
					/>
				)}
				<p className="mt-3 max-w-prose text-sm text-quiet">
					{t("origin.response.basis", { share: percent(response.counted.eligibleShare) })}
				</p>
			</Section>
		</>
	);
}

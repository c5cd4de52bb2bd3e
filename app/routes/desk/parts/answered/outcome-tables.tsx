import { useTranslation } from "react-i18next";
import { DataTable } from "#app/components/data-table.tsx";
import { outcomeOf, rateKeys } from "#app/estimate/response-rate.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import type { ToldRates } from "./response-rates.server.ts";

/** The one disposition of each operation, what it counts as, and the six rates that follow, in full words. */
export function OutcomeTables({ rates: { dispositions, whole } }: { rates: ToldRates }) {
	const { t } = useTranslation("answered");
	const format = useFormat();
	const percent = (rate: number | null) =>
		rate === null ? t("rates.absent") : format.quantity(rate * 100, "percent", 1);
	const numeric = { numeric: true } as const;
	return (
		<>
			<DataTable
				caption={t("rates.dispositions")}
				rows={dispositions}
				rowKey={(row) => row.disposition}
				columns={[
					{
						key: "disposition",
						header: t("rates.disposition"),
						cell: (row) => t(`common:disposition.${row.disposition}`),
					},
					{ key: "as", header: t("rates.countsAs"), cell: (row) => t(`rates.outcome.${outcomeOf[row.disposition]}`) },
					{
						...numeric,
						key: "operations",
						header: t("rates.weighings.operations"),
						cell: (row) => format.number(row.operations),
					},
					{
						...numeric,
						key: "trees",
						header: t("rates.weighings.trees"),
						cell: (row) => format.number(row.bearingTrees),
					},
				]}
			/>
			<div className="mt-6">
				<DataTable
					caption={t("release:origin.response.rates")}
					rows={[...rateKeys]}
					rowKey={(key) => key}
					columns={[
						{
							key: "rate",
							header: t("release:origin.response.rate"),
							cell: (key) => t(`release:origin.response.${key}`),
						},
						{
							...numeric,
							key: "counted",
							header: t("rates.weighings.operations"),
							cell: (key) => percent(whole.response.counted[key]),
						},
						{
							...numeric,
							key: "weighted",
							header: t("rates.weighings.trees"),
							cell: (key) => percent(whole.response.weighted[key]),
						},
					]}
				/>
			</div>
			<p className="mt-3 max-w-prose text-sm text-quiet">
				{t("rates.basis", { share: percent(whole.response.counted.eligibleShare) })}
			</p>
		</>
	);
}

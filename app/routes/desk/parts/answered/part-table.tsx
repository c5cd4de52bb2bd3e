import { useTranslation } from "react-i18next";
import { DataTable } from "#app/components/data-table.tsx";
import { rateKeys } from "#app/estimate/response-rate.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import type { RatePart, ToldRates } from "./response-rates.server.ts";

/** Each state, district or stratum with its response rates, and how the same part stood at the end a season before. */
export function PartTable({ rates: { parts, query, earlier } }: { rates: ToldRates }) {
	const { t } = useTranslation("answered");
	const format = useFormat();
	const nameOf = usePartName(query.by);
	const percent = (rate: number | null | undefined) =>
		typeof rate === "number" ? format.quantity(rate * 100, "percent", 1) : t("rates.absent");
	const kind = query.weigh === "trees" ? "weighted" : "counted";
	return (
		<DataTable
			caption={t(`rates.captions.${query.weigh}`)}
			rows={parts}
			rowKey={(part) => part.key}
			columns={[
				{ key: "part", header: t(`rates.parts.${query.by}`), cell: nameOf },
				...(["asked", "answered"] as const).map((of) => ({
					key: of,
					header: t(`rates.${of}`),
					numeric: true,
					cell: (part: RatePart) => format.number(part[of][query.weigh]),
				})),
				...rateKeys.map((rate) => ({
					key: rate,
					header: rate.toUpperCase(),
					numeric: true,
					cell: (part: RatePart) => percent(part.response[kind][rate]),
				})),
				...(earlier
					? [
							{
								key: "before",
								header: t("rates.before", { season: String(earlier.season) }),
								numeric: true,
								cell: (part: RatePart) => percent(part.before?.response[kind].rr1),
							},
						]
					: []),
			]}
		/>
	);
}

function usePartName(by: ToldRates["query"]["by"]) {
	const { t } = useTranslation("answered");
	return ({ name: { stateFips, districtName, sizeClass } }: RatePart) => {
		const state = t(`common:state.${stateFips}`);
		if (by === "state") return state;
		if (by === "stratum") return t(`rates.size.${sizeClass}`, { state });
		return districtName ?? t("rates.noDistrict", { state });
	};
}

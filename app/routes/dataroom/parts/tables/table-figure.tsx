import { useTranslation } from "react-i18next";
import { Figure } from "#app/components/figure.tsx";
import { useFormat } from "#app/i18n/use-format.ts";
import type { DataRecord } from "#app/publish/data-file.ts";
import type { ReleaseMeasure } from "#app/publish/release.ts";
import type { ShownPart } from "#app/publish/tables/selection.ts";
import { toCell } from "#app/publish/tables/views.ts";

type TableFigureProps = {
	/** Null where the release has no such cell. */
	record: DataRecord | null;
	measure: ReleaseMeasure | undefined;
	show: readonly ShownPart[];
};

const unknown = { unit: "count", decimals: 0, season: 0 } as const;

/** One figure of a table as figures look everywhere, with as much beside it as is wanted. */
export function TableFigure({ record, measure = undefined, show }: TableFigureProps) {
	const { t } = useTranslation("dataroom");
	const format = useFormat();
	if (!record || !measure) return <Figure status={null} measure={unknown} />;
	const { quartiles, lower, upper, ...cell } = toCell(record);
	const told = show.includes("interval") ? { lower, upper, quartiles } : {};
	const error = show.includes("error") ? record.standard_error : null;
	return (
		<>
			<Figure {...cell} {...told} status={record.status === "O" ? null : cell.status} measure={measure} />
			{error !== null && (
				<span className="block text-xs text-quiet">{t("tables.error", { value: format.spread(error, measure) })}</span>
			)}
			{show.includes("status") && (
				<span className="block text-xs text-quiet">
					{t("tables.status", { code: record.status, name: t(`status.${record.status}.name`) })}
				</span>
			)}
		</>
	);
}

import { useTranslation } from "react-i18next";
import { DataTable } from "#app/components/data-table.tsx";
import { fieldId, FieldProblem, inputClasses } from "#app/components/field-frame.tsx";
import { countyName } from "#app/i18n/county-name.ts";
import type { Problem } from "#app/lib/parse-form.ts";

export type CountyRow = { countyFips: string; name: string; now: string | null; typed: string };

/** Each county with the name of its district in a box: counties with one name are one district. */
export function CountyNames({ rows, names, problems }: { rows: CountyRow[]; names: string[]; problems?: Problem[] }) {
	const { t } = useTranslation("districts");
	return (
		<>
			<datalist id="district-names">
				{names.map((name) => (
					<option key={name} value={name}>
						{name}
					</option>
				))}
			</datalist>
			<DataTable
				caption={t("table.caption")}
				captionHidden
				rows={rows}
				rowKey={(row) => row.countyFips}
				columns={[
					{ key: "county", header: t("table.county"), cell: (row) => row.name },
					{ key: "now", header: t("table.now"), cell: (row) => row.now ?? t("table.alone") },
					{ key: "district", header: t("table.district"), cell: (row) => <NameBox row={row} problems={problems} /> },
				]}
			/>
		</>
	);
}

function NameBox({ row, problems }: { row: CountyRow; problems?: Problem[] }) {
	const { t } = useTranslation("districts");
	const name = `district.${row.countyFips}`;
	const problem = problems?.find(({ field }) => field === name);
	const label = t("table.boxLabel", { county: countyName(t, row) });
	return (
		<>
			<label htmlFor={fieldId(name)} className="sr-only">
				{label}
			</label>
			<FieldProblem name={name} label={label} problem={problem} />
			<input
				id={fieldId(name)}
				name={name}
				defaultValue={row.typed}
				list="district-names"
				maxLength={60}
				aria-invalid={problem ? true : undefined}
				className={`${inputClasses(problem)} w-full min-w-48`}
			/>
			{(row.now ?? "") !== row.typed && <span className="text-sm text-quiet">{t("table.changed")}</span>}
		</>
	);
}

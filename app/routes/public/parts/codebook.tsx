import { useTranslation } from "react-i18next";
import { type Column, DataTable } from "#app/components/data-table.tsx";
import { Section } from "#app/components/section.tsx";
import { wordsIn } from "#app/i18n/language.ts";
import type { ReleaseMeasure } from "#app/publish/release.ts";

const statuses = ["shown", "rough", "withheld", "no_growers", "not_asked"] as const;

/** What each measure and each status of a release means. */
export function Codebook({ measures }: { measures: ReleaseMeasure[] }) {
	const { t } = useTranslation("public");
	const measureColumns = useMeasureColumns();
	const statusColumns: Column<(typeof statuses)[number]>[] = [
		{ key: "word", header: t("data.code.word"), cell: (status) => t(`data.code.status.${status}.word`) },
		{ key: "means", header: t("data.code.means"), cell: (status) => t(`data.code.status.${status}.means`) },
	];
	return (
		<Section title={t("data.code.title")}>
			<DataTable
				caption={t("data.code.measures")}
				columns={measureColumns}
				rows={measures}
				rowKey={(measure) => measure.key}
			/>
			<div className="mt-8">
				<DataTable
					caption={t("data.code.statuses")}
					columns={statusColumns}
					rows={[...statuses]}
					rowKey={(status) => status}
				/>
			</div>
		</Section>
	);
}

function useMeasureColumns(): Column<ReleaseMeasure>[] {
	const { t, i18n } = useTranslation("public");
	return [
		{ key: "label", header: t("map.form.measure"), cell: ({ label }) => wordsIn(label, i18n.language) },
		{ key: "means", header: t("data.code.means"), cell: ({ description }) => wordsIn(description, i18n.language) },
		{ key: "kind", header: t("data.code.kind"), cell: ({ kind }) => t(`data.code.kinds.${kind}`) },
		{ key: "unit", header: t("data.code.unit"), cell: ({ unit }) => t(`common:unitName.${unit}`) },
		{ key: "key", header: t("data.code.key"), cell: ({ key }) => <code>{key}</code> },
	];
}

import { useTranslation } from "react-i18next";
import { ChoiceField } from "#app/components/choice-field.tsx";
import { type Block, chartKinds } from "#app/publish/report.ts";
import { AreaField, CropField, MeasureField, type Offered } from "./report-editor-fields.tsx";

type ChartFieldsProps = { block: Extract<Block, { type: "chart" }>; name: string; offered: Offered };

/** What a chart shows. Fields that its kind has no use for stay as they were, out of sight. */
export function ChartFields({ block, name, offered }: ChartFieldsProps) {
	const { t } = useTranslation("report");
	const byCrop = block.chart === "areas" || block.chart === "seasons";
	const byArea = block.chart !== "areas";
	return (
		<div className="flex flex-wrap gap-x-4">
			<ChoiceField
				kind="select"
				name={`${name}.chart`}
				legend={t("chart.kindLabel")}
				defaultValue={block.chart}
				options={chartKinds.map((kind) => ({ value: kind, label: t(`chart.kinds.${kind}`) }))}
			/>
			<MeasureField name={`${name}.measure`} offered={offered} value={block.measure} />
			{byCrop ? (
				<CropField name={`${name}.crop`} offered={offered} value={block.crop} />
			) : (
				<input type="hidden" name={`${name}.crop`} value={block.crop} />
			)}
			{byArea ? (
				<AreaField name={`${name}.area`} offered={offered} value={block.area} />
			) : (
				<input type="hidden" name={`${name}.area`} value={block.area} />
			)}
			{block.chart === "areas" ? (
				<ChoiceField
					kind="select"
					name={`${name}.kind`}
					legend={t("chart.areasLabel")}
					defaultValue={block.kind}
					options={(["district", "state"] as const).map((kind) => ({
						value: kind,
						label: t(`common:areaKind.plural.${kind}`),
					}))}
				/>
			) : (
				<input type="hidden" name={`${name}.kind`} value={block.kind} />
			)}
		</div>
	);
}

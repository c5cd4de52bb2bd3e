import { useTranslation } from "react-i18next";
import { Button } from "#app/components/button.tsx";
import { ChoiceField } from "#app/components/choice-field.tsx";
import { Confirm } from "#app/components/confirm.tsx";
import type { Problem } from "#app/lib/parse-form.ts";
import { type Block, cautionKeys, tableKinds } from "#app/publish/report.ts";
import { ChartFields } from "./report-editor-chart.tsx";
import { PhotoFields } from "./report-editor-photo.tsx";
import { AreaField, CropField, MeasureField, type Offered, TextPair } from "./report-editor-fields.tsx";

type EditorBlockProps = { block: Block; index: number; last: boolean; offered: Offered; problems?: Problem[] };

/** One block with its fields and its buttons; moved by buttons, so that no dragging is needed. */
export function EditorBlock({ block, index, last, offered, problems }: EditorBlockProps) {
	const { t } = useTranslation("public");
	const name = `blocks[${index}]`;
	const label = t("report_editor.blockNamed", { number: index + 1, type: t(`report_editor.types.${block.type}`) });
	return (
		<li id={`block-${block.id}`} tabIndex={-1} aria-label={label} className="border-t border-line py-5">
			<input type="hidden" name={`${name}.id`} value={block.id} />
			<input type="hidden" name={`${name}.type`} value={block.type} />
			<div className="mb-3 flex flex-wrap items-center justify-between gap-3">
				<p className="font-bold">{label}</p>
				<div className="flex flex-wrap items-start gap-2">
					{index > 0 && (
						<Button
							kind="secondary"
							size="small"
							name="intent"
							value={`up:${block.id}`}
							aria-label={t("report_editor.upNamed", { label })}
						>
							↑ {t("report_editor.up")}
						</Button>
					)}
					{!last && (
						<Button
							kind="secondary"
							size="small"
							name="intent"
							value={`down:${block.id}`}
							aria-label={t("report_editor.downNamed", { label })}
						>
							↓ {t("report_editor.down")}
						</Button>
					)}
					<Confirm
						trigger={t("report_editor.remove")}
						title={t("report_editor.removeTitle", { label })}
						body={t("report_editor.removeBody")}
						confirmLabel={t("report_editor.remove")}
						name="intent"
						value={`remove:${block.id}`}
						size="small"
						danger
					/>
				</div>
			</div>
			<BlockFields block={block} name={name} label={label} offered={offered} problems={problems} />
		</li>
	);
}

type BlockFieldsProps = { block: Block; name: string; label: string; offered: Offered; problems?: Problem[] };

function BlockFields({ block, name, label, offered, problems }: BlockFieldsProps) {
	const { t } = useTranslation("public");
	switch (block.type) {
		case "heading":
			return <TextPair name={`${name}.text`} label={label} value={block.text} problems={problems} />;
		case "text":
			return (
				<>
					<TextPair name={`${name}.text`} label={label} value={block.text} problems={problems} rows={6} />
					<Button kind="secondary" size="small" name="intent" value={`insert:${block.id}`}>
						{t("report_editor.insert")}
					</Button>
				</>
			);
		case "caution":
			return (
				<>
					<ChoiceField
						kind="select"
						name={`${name}.key`}
						legend={t("report_editor.whichCaution")}
						defaultValue={block.key}
						options={cautionKeys.map((key) => ({ value: key, label: t(`caution.${key}.title`) }))}
					/>
					<p className="max-w-prose text-sm text-quiet">{t(`caution.${block.key}.body`)}</p>
				</>
			);
		case "photo":
			return <PhotoFields block={block} name={name} label={label} offered={offered} problems={problems} />;
		case "chart":
			return <ChartFields block={block} name={name} offered={offered} />;
		default:
			return (
				<div className="flex flex-wrap gap-x-4">
					<MeasureField name={`${name}.measure`} offered={offered} value={block.measure} />
					{block.type !== "crops" && <CropField name={`${name}.crop`} offered={offered} value={block.crop} />}
					{"area" in block && <AreaField name={`${name}.area`} offered={offered} value={block.area} />}
					{block.type === "table" && (
						<ChoiceField
							kind="select"
							name={`${name}.kind`}
							legend={t("map.form.kind")}
							defaultValue={block.kind}
							options={tableKinds.map((kind) => ({ value: kind, label: t(`common:areaKind.plural.${kind}`) }))}
						/>
					)}
				</div>
			);
	}
}

import { useRef, useState } from "react";
import { useTranslation } from "react-i18next";
import { Form, useNavigation } from "react-router";
import { Button, ButtonLink } from "#app/components/button.tsx";
import { ChoiceField } from "#app/components/choice-field.tsx";
import { ErrorSummary } from "#app/components/error-summary.tsx";
import { Notice } from "#app/components/notice.tsx";
import { Section } from "#app/components/section.tsx";
import { useFocusOnHash } from "#app/components/use-focus-on-hash.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import type { Problem } from "#app/lib/parse-form.ts";
import type { DeskReport } from "#app/publish/drafting/reports.server.ts";
import { blockTypes, type CautionKey, type DraftWords, type ReportContent } from "#app/publish/report.ts";
import { Autosave } from "./report-autosave.tsx";
import { EditorBlock } from "./report-editor-block.tsx";
import { type Offered, PlacePicker, TextPair, useFieldLabels } from "./report-editor-fields.tsx";

type ReportEditorProps = {
	report: Pick<DeskReport, "content" | "edit" | "correction">;
	offered: Offered;
	/** Cautions that the page will add to what stands here. */
	cautionsAdded: CautionKey[];
	/** What an action sent back instead of saving. */
	answer?: {
		content: ReportContent;
		correction: DraftWords | null;
		edit: number;
		problems: Problem[];
		conflict: number | null;
	};
};

/** One form for the whole report: every button saves all that is written, then does its own act. */
export function ReportEditor({ report, offered, cautionsAdded, answer }: ReportEditorProps) {
	const { t } = useTranslation("public");
	const content = answer?.content ?? report.content;
	const labels = useFieldLabels(content);
	const format = useFormat();
	const busy = useNavigation().state === "submitting";
	const form = useRef<HTMLFormElement>(null);
	const [savedEdit, setSavedEdit] = useState(0);
	const correction = answer?.correction ?? report.correction;
	useFocusOnHash();
	return (
		<>
			<ErrorSummary problems={answer?.problems.length ? answer.problems : undefined} labels={labels} />
			<Form method="post" ref={form} key={answer ? "answer" : report.edit} className="max-w-6xl">
				<input type="hidden" name="edit" value={Math.max(savedEdit, answer?.edit ?? report.edit)} />
				{/* Enter in a text box presses the first button of a form: it saves, and moves nothing. */}
				<button type="submit" name="intent" value="save" tabIndex={-1} aria-hidden="true" className="sr-only">
					{t("report_editor.save")}
				</button>
				{answer?.conflict && <Conflict edit={answer.conflict} />}
				{correction && (
					<Section title={t("report:correction.title")}>
						<TextPair
							name="correction"
							label={labels.correction ?? ""}
							help={t("report:correction.help")}
							value={correction}
							problems={answer?.problems}
							rows={3}
						/>
					</Section>
				)}
				<Section title={t("report_editor.titleSummary")}>
					<TextPair name="title" label={labels.title ?? ""} value={content.title} problems={answer?.problems} />
					<TextPair
						name="summary"
						label={labels.summary ?? ""}
						value={content.summary}
						problems={answer?.problems}
						rows={5}
					/>
				</Section>
				<Section title={t("report_editor.blocks")} id="field-blocks">
					<p className="mb-4 max-w-prose text-sm text-quiet">{t("report:editor.markdown")}</p>
					<PlacePicker offered={offered} />
					<ol className="list-none">
						{content.blocks.map((block, index) => (
							<EditorBlock
								key={block.id}
								block={block}
								index={index}
								last={index === content.blocks.length - 1}
								offered={offered}
								problems={answer?.problems}
							/>
						))}
					</ol>
					{cautionsAdded.length > 0 && (
						<Notice tone="caution">
							{t("report:editor.cautionsAdded", {
								cautions: format.list(cautionsAdded.map((key) => t(`caution.${key}.title`))),
							})}
						</Notice>
					)}
					<div className="mt-6 flex flex-wrap items-end gap-3 border-t border-rule pt-4">
						<ChoiceField
							kind="select"
							name="add"
							legend={t("report_editor.addWhat")}
							options={blockTypes.map((type) => ({ value: type, label: t(`report_editor.types.${type}`) }))}
						/>
						<div className="mb-6">
							<Button kind="secondary" name="intent" value="add">
								{t("report_editor.add")}
							</Button>
						</div>
					</div>
				</Section>
				<div className="sticky bottom-0 z-20 flex flex-wrap gap-3 border-t-2 border-line bg-paper py-4">
					<Button name="intent" value="save" busy={busy}>
						{t("report_editor.save")}
					</Button>
					<Button kind="secondary" name="intent" value="submit">
						{t("report_editor.submit")}
					</Button>
					<Autosave form={form} onSaved={setSavedEdit} />
				</div>
			</Form>
		</>
	);
}

/** Two editors: what was written here stays in the form, and is saved over the other only when that is asked for. */
function Conflict({ edit }: { edit: number }) {
	const { t } = useTranslation("public");
	return (
		<div role="alert">
			<Notice tone="attention" title={t("report_editor.conflict.title")}>
				<p>{t("report_editor.conflict.body")}</p>
				<div className="mt-3 flex flex-wrap gap-3">
					<ButtonLink to="?view=preview" kind="secondary" target="_blank">
						{t("report_editor.conflict.other")}
					</ButtonLink>
					<Button kind="danger" name="intent" value={`overwrite:${edit}`}>
						{t("report_editor.conflict.mine")}
					</Button>
				</div>
			</Notice>
		</div>
	);
}

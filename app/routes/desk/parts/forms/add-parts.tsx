import { useTranslation } from "react-i18next";
import { Form } from "react-router";
import type { FormDraft } from "#app/collect/editing/draft.ts";
import { questionTypes } from "#app/collect/editing/edit-questions.ts";
import { Button } from "#app/components/button.tsx";
import { ChoiceField } from "#app/components/choice-field.tsx";
import { Confirm } from "#app/components/confirm.tsx";
import { Section } from "#app/components/section.tsx";
import type { FormValues, Problem } from "#app/lib/parse-form.ts";
import type { Words } from "#app/lib/words.ts";
import { useFormWords } from "./condition-words.ts";
import { TextPair, usePairLabels } from "./text-pair.tsx";

type Sent = { values?: FormValues; problems?: Problem[] };

/** A new question and a new screen; what was typed and could not be added yet comes back. */
export function AddParts({ draft, values, problems }: Sent & { draft: FormDraft }) {
	const { t } = useTranslation("forms");
	const said = useFormWords();
	const newest = draft.screens.at(-1);
	return (
		<>
			{newest && (
				<Section title={t("add.question")}>
					<Form method="post" noValidate>
						<input type="hidden" name="intent" value="add_question" />
						<TextPair name="text" label={t("question.text")} value={textIn(values, "text")} problems={problems} isNew />
						<div className="grid gap-x-6 md:grid-cols-2">
							<ChoiceField
								kind="select"
								name="type"
								legend={t("question.type")}
								options={questionTypes.map((type) => ({ value: type, label: t(`type.${type}`) }))}
								defaultValue={String(values?.type ?? "number")}
							/>
							<ChoiceField
								kind="select"
								name="screen"
								legend={t("question.screen")}
								options={draft.screens.map(({ key, title }) => ({ value: key, label: said(title) }))}
								defaultValue={String(values?.screen ?? newest.key)}
							/>
						</div>
						<Button>{t("add.questionButton")}</Button>
					</Form>
				</Section>
			)}
			<Section title={t("add.screen")}>
				<Form method="post" noValidate>
					<input type="hidden" name="intent" value="add_screen" />
					<TextPair
						name="screenTitle"
						label={t("screen.title")}
						value={textIn(values, "screenTitle")}
						problems={problems}
						isNew
					/>
					<AskedField value={values?.asked === "planting" ? "planting" : "once"} />
					<Button kind="secondary">{t("add.screenButton")}</Button>
				</Form>
			</Section>
		</>
	);
}

/** Whether the questions of a screen are asked once, or of each planting. */
export function AskedField({ value, help }: { value: "once" | "planting"; help?: string }) {
	const { t } = useTranslation("forms");
	return (
		<ChoiceField
			kind="select"
			name="asked"
			legend={t("screen.asked.legend")}
			help={help}
			options={(["once", "planting"] as const).map((asked) => ({ value: asked, label: t(`screen.asked.${asked}`) }))}
			defaultValue={value}
		/>
	);
}

export function TitleForm({ title, values, problems }: Sent & { title: Words }) {
	const { t } = useTranslation("forms");
	return (
		<Section title={t("form.name")}>
			<Form method="post" noValidate>
				<input type="hidden" name="intent" value="title" />
				<TextPair
					name="title"
					label={t("form.title")}
					value={values?.intent === "title" ? textIn(values, "title") : title}
					problems={problems}
				/>
				<Button kind="secondary">{t("form.rename")}</Button>
			</Form>
		</Section>
	);
}

export function DropForm() {
	const { t } = useTranslation("forms");
	return (
		<Section title={t("drop.title")}>
			<Form method="post">
				<Confirm
					trigger={t("drop.button")}
					title={t("drop.ask")}
					body={t("drop.body")}
					confirmLabel={t("drop.button")}
					name="intent"
					value="drop"
					danger
				/>
			</Form>
		</Section>
	);
}

export function useAddLabels(): Record<string, string> {
	const { t } = useTranslation("forms");
	return usePairLabels()({ title: t("form.title"), screenTitle: t("screen.title"), text: t("question.text") });
}

/** A text that was sent, in whatever shape it came. */
function textIn(values: FormValues | undefined, name: string): Words {
	const sent = values?.[name];
	const texts = typeof sent === "object" && sent !== null ? (sent as Partial<Words>) : {};
	return { en: String(texts.en ?? ""), es: String(texts.es ?? "") };
}

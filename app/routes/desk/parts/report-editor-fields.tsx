import { useState } from "react";
import { useTranslation } from "react-i18next";
import { AreaPicker } from "#app/components/area-picker.tsx";
import { ChoiceField } from "#app/components/choice-field.tsx";
import { TextField } from "#app/components/text-field.tsx";
import { type Language, wordsIn } from "#app/i18n/language.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import type { Problem } from "#app/lib/parse-form.ts";
import type { ReportPhoto } from "#app/publish/drafting/report-photos.server.ts";
import type { ReleaseArea, ReleaseMeasure } from "#app/publish/release.ts";
import { type DraftWords, eras, type ReportContent, typedFigures } from "#app/publish/report.ts";

/** What a release holds to point to, and the photos that were added to the report. */
export type Offered = {
	measures: Pick<ReleaseMeasure, "key" | "label">[];
	crops: string[];
	areas: ReleaseArea[];
	photos: ReportPhoto[];
};

type TextPairProps = {
	name: string;
	label: string;
	value: DraftWords;
	problems?: Problem[];
	rows?: number;
	help?: string;
};

/** One text in both languages, side by side where there is room, each with what is still amiss in it. */
export function TextPair(props: TextPairProps) {
	return (
		<div className="grid gap-x-6 lg:grid-cols-2">
			<TextIn {...props} language="en" />
			<TextIn {...props} language="es" />
		</div>
	);
}

function TextIn({ name, label, value, problems, rows, help, language }: TextPairProps & { language: Language }) {
	const { t } = useTranslation("public");
	const [text, setText] = useState(value[language]);
	const field = `${name}.${language}`;
	return (
		// What is typed bubbles up to here; the field itself stays uncontrolled, and works without scripts.
		<div onInput={(event) => setText((event.target as HTMLTextAreaElement).value)}>
			<TextField
				name={field}
				label={t("report_editor.inLanguage", { label, language: t(`common:language.${language}`) })}
				defaultValue={value[language]}
				multiline={rows !== undefined}
				rows={rows}
				size="full"
				help={help}
				lang={language}
				problem={problems?.find((problem) => problem.field === field)}
				below={<Amiss text={text} />}
			/>
		</div>
	);
}

/** Beside the field: a text that is missing, and numbers that are typed and so would not follow the release. */
function Amiss({ text }: { text: string }) {
	const { t } = useTranslation("report");
	const format = useFormat();
	const found = typedFigures(text);
	const words = !text.trim()
		? t("editor.missing")
		: found.length > 0
			? t("editor.typed", { count: found.length, found: format.list(found) })
			: "";
	return (
		<p aria-live="polite" className="mt-1 text-sm font-bold text-attention">
			{words}
		</p>
	);
}

export function MeasureField({ name, offered, value }: { name: string; offered: Offered; value?: string }) {
	const { t, i18n } = useTranslation("public");
	const options = offered.measures.map(({ key, label }) => ({ value: key, label: wordsIn(label, i18n.language) }));
	return (
		<ChoiceField kind="select" name={name} legend={t("map.form.measure")} options={options} defaultValue={value} />
	);
}

export function CropField({ name, offered, value }: { name: string; offered: Offered; value?: string }) {
	const { t } = useTranslation("public");
	const options = offered.crops.map((crop) => ({ value: crop, label: t(`common:crop.${crop}`) }));
	return <ChoiceField kind="select" name={name} legend={t("map.form.crop")} options={options} defaultValue={value} />;
}

export function AreaField({ name, offered, value }: { name: string; offered: Offered; value?: string }) {
	const { t } = useTranslation("public");
	return (
		<AreaPicker areas={offered.areas} name={name} label={t("report_editor.area")} defaultValue={value ?? "network"} />
	);
}

/** Chooses the figure that a text's "insert" button puts into it. */
export function PlacePicker({ offered }: { offered: Offered }) {
	const { t } = useTranslation("public");
	return (
		<fieldset className="mb-4 min-w-0 border border-rule bg-sheet px-4 pt-3">
			<legend className="px-1 font-bold">{t("report_editor.pick.title")}</legend>
			<p className="mb-3 max-w-prose text-sm text-quiet">{t("report_editor.pick.help")}</p>
			<div className="flex flex-wrap gap-x-4">
				<MeasureField name="pick.measure" offered={offered} />
				<CropField name="pick.crop" offered={offered} />
				<AreaField name="pick.area" offered={offered} />
				<ChoiceField
					kind="select"
					name="pick.when"
					legend={t("report:editor.when")}
					options={["now", ...eras].map((era) => ({ value: era, label: t(`report:editor.eras.${era}`) }))}
				/>
			</div>
		</fieldset>
	);
}

/** Every field's name in words, for the summary of what is to be mended. */
export function useFieldLabels(content: ReportContent): Record<string, string> {
	const { t } = useTranslation("public");
	const texts: [string, string][] = [
		["correction", t("report:correction.label")],
		["title", t("report_editor.title")],
		["summary", t("report_editor.summary")],
		["blocks", t("report_editor.blocks")],
		...content.blocks.map(({ type }, index): [string, string] => [
			`blocks[${index}].${type === "photo" ? "alt" : "text"}`,
			t("report_editor.blockNamed", { number: index + 1, type: t(`report_editor.types.${type}`) }),
		]),
	];
	const photos = content.blocks.map((_, index) => [`blocks[${index}].photo`, t("report:photos.which")] as const);
	const inLanguages = texts.flatMap(([name, label]) =>
		(["en", "es"] as const).map((language): [string, string] => [
			`${name}.${language}`,
			t("report_editor.inLanguage", { label, language: t(`common:language.${language}`) }),
		]),
	);
	return Object.fromEntries([...texts, ...photos, ...inLanguages]);
}

import { useState } from "react";
import { useTranslation } from "react-i18next";
import { longestText } from "#app/collect/editing/draft.ts";
import { TextField } from "#app/components/text-field.tsx";
import { type Language, languages } from "#app/i18n/language.ts";
import type { Problem } from "#app/lib/parse-form.ts";
import type { Words } from "#app/lib/words.ts";

type TextPairProps = {
	name: string;
	label: string;
	value: Words;
	problems?: Problem[];
	rows?: number;
	help?: string;
	/** Whether it may be left out in both languages alike. */
	optional?: boolean;
	/** Whether it is of a part that is not there yet: nothing is missing before it is begun. */
	isNew?: boolean;
};

/** One text in both languages, side by side where there is room; one that lacks its translation says so. */
export function TextPair(props: TextPairProps) {
	const [value, setValue] = useState(props.value);
	return (
		<div className="grid gap-x-6 md:grid-cols-2">
			{languages.map((language) => (
				<TextIn
					key={language}
					{...props}
					language={language}
					missing={isMissing(value, language, props.optional || props.isNew)}
					onText={(text) => setValue((before) => ({ ...before, [language]: text }))}
				/>
			))}
		</div>
	);
}

/** Whether a text is to be translated: it is there in the other language, or has to be there. */
function isMissing(value: Words, language: Language, mayLack = false): boolean {
	const isEmpty = value[language].trim() === "";
	return isEmpty && (!mayLack || value.en.trim() !== "" || value.es.trim() !== "");
}

type TextInProps = TextPairProps & { language: Language; missing: boolean; onText: (text: string) => void };

function TextIn({ name, label, value, problems, rows, help, optional, language, missing, onText }: TextInProps) {
	const { t } = useTranslation("forms");
	const labelIn = useLabelIn();
	const field = `${name}.${language}`;
	return (
		// What is typed bubbles up to here; the field itself stays uncontrolled, and works without scripts.
		<div onInput={(event) => onText((event.target as HTMLTextAreaElement).value)}>
			<TextField
				name={field}
				label={labelIn(label, language)}
				defaultValue={value[language]}
				multiline={rows !== undefined}
				rows={rows}
				maxLength={longestText}
				size="full"
				help={help}
				lang={language}
				optional={optional}
				problem={problems?.find((problem) => problem.field === field)}
				below={
					<p aria-live="polite" className="mt-1 text-sm font-bold text-attention">
						{missing && t(`field.missing.${language}`)}
					</p>
				}
			/>
		</div>
	);
}

function useLabelIn() {
	const { t } = useTranslation("forms");
	return (label: string, language: Language) => t("field.inLanguage", { label, language: t(`language.${language}`) });
}

/** What both boxes of each text are called, for the summary of problems: from the texts' names and labels. */
export function usePairLabels() {
	const labelIn = useLabelIn();
	return (labels: Record<string, string>): Record<string, string> =>
		Object.fromEntries(
			Object.entries(labels).flatMap(([name, label]) =>
				languages.map((language) => [`${name}.${language}`, labelIn(label, language)]),
			),
		);
}

import { useTranslation } from "react-i18next";
import type { FormDraft } from "#app/collect/editing/draft.ts";
import { limitNames } from "#app/collect/editing/question.schema.ts";
import type { Question } from "#app/collect/form.ts";
import { DescriptionList } from "#app/components/description-list.tsx";
import { useFormat } from "#app/i18n/use-format.ts";
import { decimalsOf } from "#app/lib/format.ts";
import { useConditionWords, useFormWords } from "./condition-words.ts";

type QuestionFactsProps = { draft: FormDraft; question: Question };

/** What the editor's fields hold, for whoever reads a form that is not theirs to change. */
export function QuestionFacts({ draft, question }: QuestionFactsProps) {
	const { t } = useTranslation("forms");
	const format = useFormat();
	const said = useFormWords();
	const inWords = useConditionWords(draft);
	const unit = question.type === "number" ? ` (${t(`unit.kept.${question.unitFamily}`)})` : "%";
	const limits = "limits" in question ? (question.limits ?? {}) : {};
	const facts: { term: string; detail: string | false | undefined }[] = [
		{ term: t("question.text"), detail: said(question.text) },
		{ term: t("question.help"), detail: question.help && said(question.help) },
		{ term: t("question.label"), detail: question.label && said(question.label) },
		{ term: t("question.type"), detail: t(`type.${question.type}`) },
		{ term: t("question.unit"), detail: question.type === "number" && t(`unit.${question.unitFamily}`) },
		...limitNames.map((name) => {
			const limit = limits[name];
			return {
				term: t(`limits.${name}`),
				detail: limit !== undefined && `${format.number(limit, decimalsOf(limit))}${unit}`,
			};
		}),
		{ term: t("condition.title"), detail: question.condition && inWords(question.condition) },
	];
	return (
		<>
			<DescriptionList items={facts.filter(({ detail }) => detail)} />
			{question.required && <p className="mt-4">{t("question.required")}</p>}
			{question.sensitive && <p className="mt-4">{t("question.sensitive")}</p>}
		</>
	);
}

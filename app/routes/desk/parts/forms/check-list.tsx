import { useTranslation } from "react-i18next";
import { href, Link } from "react-router";
import type { FormDraft } from "#app/collect/editing/draft.ts";
import { isUntranslated } from "#app/collect/editing/untranslated.ts";
import type { Screen } from "#app/collect/form.ts";
import { ButtonLink } from "#app/components/button.tsx";
import { Section } from "#app/components/section.tsx";
import { StatusBadge } from "#app/components/status-badge.tsx";
import { useConditionWords, useFormWords } from "./condition-words.ts";

type CheckListProps = { formId: string; draft: FormDraft; screen: Screen; mayEdit: boolean; title: string };

/** The edit checks of a screen in words. */
export function CheckList({ formId, draft, screen, mayEdit, title }: CheckListProps) {
	const { t } = useTranslation("forms");
	const said = useFormWords();
	const inWords = useConditionWords(draft);
	const addressOf = (check: string) =>
		href("/desk/forms/:formId/screens/:key/checks/:check", { formId, key: screen.key, check });
	const add = mayEdit && screen.questions.length > 0 && (
		<ButtonLink to={addressOf("new")} kind="secondary" size="small">
			{t("check.add")}
		</ButtonLink>
	);
	return (
		<Section title={title} actions={add}>
			<p className="mb-3 max-w-prose text-quiet">{t("check.lead")}</p>
			<ul className="list-none divide-y divide-rule">
				{(screen.checks ?? []).map((check) => (
					<li key={check.key} className="py-3">
						<p>
							<StatusBadge tone={check.kind === "hard" ? "stop" : "neutral"}>
								{t(`check.kind.${check.kind}`)}
							</StatusBadge>{" "}
							{isUntranslated(check.message) && <StatusBadge tone="attention">{t("outline.untranslated")}</StatusBadge>}
						</p>
						<p className="mt-1">
							{mayEdit ? <Link to={addressOf(check.key)}>{said(check.message)}</Link> : said(check.message)}
						</p>
						<p className="text-sm text-quiet">{t("check.when", { condition: inWords(check.when) })}</p>
					</li>
				))}
			</ul>
		</Section>
	);
}

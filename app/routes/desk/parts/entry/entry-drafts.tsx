import { useTranslation } from "react-i18next";
import { href, Link } from "react-router";
import { Notice } from "#app/components/notice.tsx";
import { useFormat } from "#app/i18n/use-format.ts";
import { useGrowerName } from "../grower-name.ts";

type EntryDraftsProps = { drafts: { operationId: string; name: string; savedAt: Date }[]; surveyId: string };

/** Answers that the associate has begun to type in and not sent, each with a way back to it. */
export function EntryDrafts({ drafts, surveyId }: EntryDraftsProps) {
	const { t } = useTranslation("answered");
	const format = useFormat();
	const nameOf = useGrowerName();
	if (drafts.length === 0) return null;
	return (
		<Notice tone="attention" title={t("enter.draftsTitle", { count: drafts.length })}>
			<ul>
				{drafts.map(({ operationId, name, savedAt }) => (
					<li key={operationId}>
						<Link to={href("/desk/surveys/:surveyId/enter/:operationId", { surveyId, operationId })}>
							{t("enter.draftOf", { name: nameOf(name), moment: format.moment(savedAt) })}
						</Link>
					</li>
				))}
			</ul>
		</Notice>
	);
}

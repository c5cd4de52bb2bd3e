import { useTranslation } from "react-i18next";
import { href, Link } from "react-router";
import { useFormat } from "#app/i18n/use-format.ts";

type AnsweredLinkProps = {
	surveyId: string;
	responseId: string | null;
	submittedAt: Date | null;
	withdrawnAt: Date | null;
	/** Whose or which answers: rows of a list differ by it, which the day alone does not tell. */
	of: string;
	timeZone: string;
};

/** When answers came, leading to them; or that none did. */
export function AnsweredLink({ surveyId, responseId, submittedAt, withdrawnAt, of, timeZone }: AnsweredLinkProps) {
	const { t } = useTranslation("desk");
	const format = useFormat();
	if (!responseId) return <span className="text-quiet">{t("responses.notAnswered")}</span>;
	const text = submittedAt
		? format.dayOf(submittedAt, timeZone)
		: t(withdrawnAt ? "responses.withdrawn" : "responses.begun");
	return (
		<Link
			to={href("/desk/surveys/:surveyId/responses/:responseId", { surveyId, responseId })}
			aria-label={t("responses.answersOf", { text, of })}
			className="print-plain"
		>
			{text}
		</Link>
	);
}

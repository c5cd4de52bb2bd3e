import { useTranslation } from "react-i18next";
import { href, Link } from "react-router";
import { Notice } from "#app/components/notice.tsx";
import { useFormat } from "#app/i18n/use-format.ts";

type EntryNoticesProps = {
	place: { surveyId: string; operationId: string };
	timeZone: string;
	/** Whether there are boxes below to type into. */
	canSend: boolean;
	isLate: boolean;
	response: {
		responseId: string;
		submittedVersion: number;
		submittedAt: Date | null;
		keepsUnsent: boolean;
	} | null;
	draft: { startedAt: Date; savedAt: Date } | null;
	others: { personName: string; savedAt: Date }[];
	posted: { outcome: string } | undefined;
};

/** Who else is at these answers, and what was sent in before: said before a word is typed. */
export function EntryNotices({ place, timeZone, canSend, isLate, response, draft, others, posted }: EntryNoticesProps) {
	const { t } = useTranslation("answered");
	const format = useFormat();
	const moment = (at: Date) => format.moment(at, timeZone);
	const answers = response && response.submittedVersion > 0 && (
		<Link
			to={href("/desk/surveys/:surveyId/responses/:responseId", {
				surveyId: place.surveyId,
				responseId: response.responseId,
			})}
		>
			{t("enter.seeSent")}
		</Link>
	);
	if (posted?.outcome === "answered_meanwhile")
		return (
			<div role="alert">
				<Notice tone="caution" title={t("enter.meanwhileTitle")}>
					<p>{t("enter.meanwhileBody")}</p>
					<p>{answers}</p>
				</Notice>
			</div>
		);
	return (
		<>
			{isLate && <Notice tone="attention">{t("enter.late")}</Notice>}
			{response?.submittedAt && (
				<Notice tone="info" title={t("enter.sentTitle")}>
					<p>{t(canSend ? "enter.sentBody" : "enter.sentLast", { moment: moment(response.submittedAt) })}</p>
					<p>{answers}</p>
				</Notice>
			)}
			{canSend && response?.keepsUnsent && (
				<Notice tone="attention" title={t("enter.unsentTitle")}>
					{t("enter.unsentBody")}
				</Notice>
			)}
			{canSend &&
				others.map(({ personName, savedAt }) => (
					<Notice key={personName} tone="attention">
						{t("enter.other", { name: personName, moment: moment(savedAt) })}
					</Notice>
				))}
			{draft && !posted && (
				<Notice tone="info">
					{t(canSend ? "enter.draft" : "enter.draftUnsent", { moment: moment(draft.savedAt) })}
				</Notice>
			)}
		</>
	);
}

import { useTranslation } from "react-i18next";
import { href, redirect } from "react-router";
import type { Route } from "./+types/receipt";
import { listAnswerLines } from "#app/collect/answer-lines.ts";
import { AnswerList } from "#app/components/answer-list.tsx";
import { ButtonLink } from "#app/components/button.tsx";
import { Notice } from "#app/components/notice.tsx";
import { Page } from "#app/components/page.tsx";
import { Section } from "#app/components/section.tsx";
import { getLanguage } from "#app/i18n/middleware.server.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import { getAnswering } from "./parts/answering.server.ts";
import { photoAddress } from "./parts/photo-address.ts";
import { PhonePart } from "./parts/phone-part.tsx";
import { phonePart } from "./parts/phone.server.ts";
import { RehearsalNotice } from "./parts/rehearsal-notice.tsx";

export const handle = { bare: true };

export async function loader({ context, params }: Route.LoaderArgs) {
	const answering = await getAnswering(context, params);
	const { response, definition, plantings, answers } = answering;
	const submittedAt = response?.lateAt ?? response?.submittedAt;
	if (!response?.receiptCode || !submittedAt) {
		throw redirect(href("/answer/:surveyId/:operationId", params), 303);
	}
	return {
		code: response.receiptCode,
		submittedAt,
		isLate: response.lateAt !== null,
		isOpen: answering.isOpen,
		isRehearsal: answering.isRehearsal,
		changed: response.changedSinceSubmission,
		operationName: answering.operationName,
		closesAt: answering.closesAt,
		timeZone: answering.timeZone,
		groups: listAnswerLines(definition, plantings, answers),
		phone: phonePart(answering, getLanguage(context)),
	};
}

export default function Receipt({ loaderData, params }: Route.ComponentProps) {
	const { t } = useTranslation("grower");
	const format = useFormat();
	const { code, submittedAt, isLate, isOpen, changed, operationName, closesAt, timeZone, groups } = loaderData;
	const closes = format.moment(closesAt, timeZone);
	return (
		<Page title={t("receipt.title")} lead={t("receipt.lead", { operation: operationName })}>
			{loaderData.isRehearsal && <RehearsalNotice />}
			{isLate && (
				<Notice tone="attention" title={t("late.title")}>
					{t("late.kept")}
				</Notice>
			)}
			{changed && <Notice tone="attention">{t("review.changedNotSent")}</Notice>}
			<div className="border-2 border-line p-5">
				<p className="text-base text-quiet">{t("receipt.code")}</p>
				<p className="text-3xl font-bold tracking-wider">{code}</p>
				<p className="mt-1 text-base">{t("receipt.sentAt", { moment: format.moment(submittedAt, timeZone) })}</p>
			</div>
			<Section title={t("receipt.next")}>
				<ul className="list-disc space-y-2 pl-6">
					<li>{t("receipt.mail")}</li>
					<li>{t("receipt.call")}</li>
					{!isLate && <li>{t("receipt.figures")}</li>}
				</ul>
			</Section>
			<Section title={t("receipt.yours")}>
				{isOpen && <p className="mb-4">{t("receipt.amend", { closes })}</p>}
				<div className="no-print mb-6">
					<ButtonLink kind="secondary" to={href("/answer/:surveyId/:operationId/review", params)}>
						{t("receipt.change")}
					</ButtonLink>
				</div>
				<AnswerList groups={groups} photoHref={photoAddress(params)} />
			</Section>
			<PhonePart {...loaderData.phone} stage="receipt" />
		</Page>
	);
}

import { useTranslation } from "react-i18next";
import { Form, href, redirect } from "react-router";
import type { Route } from "./+types/start";
import { requireGrower } from "#app/auth/guard.server.ts";
import { findOpenStep } from "#app/collect/progress.ts";
import { startResponse } from "#app/collect/responses.server.ts";
import { listSteps } from "#app/collect/steps.ts";
import { Button, ButtonLink } from "#app/components/button.tsx";
import { Notice } from "#app/components/notice.tsx";
import { Page } from "#app/components/page.tsx";
import { Pledge } from "#app/components/pledge.tsx";
import { Section } from "#app/components/section.tsx";
import { wordsIn } from "#app/i18n/language.ts";
import { getLanguage } from "#app/i18n/middleware.server.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import { pledgeVersion } from "#app/lib/pledge.ts";
import { refusal } from "#app/lib/refusal.ts";
import { getAnswering } from "./parts/answering.server.ts";
import { LateNotice } from "./parts/late-notice.tsx";
import { PhonePart } from "./parts/phone-part.tsx";
import { phonePart } from "./parts/phone.server.ts";
import { RehearsalNotice } from "./parts/rehearsal-notice.tsx";

export const handle = { bare: true };

export async function loader({ context, params }: Route.LoaderArgs) {
	const answering = await getAnswering(context, params);
	const { definition, plantings, answers, response } = answering;
	return {
		phone: phonePart(answering, getLanguage(context)),
		title: answering.title,
		season: answering.season,
		operationName: answering.operationName,
		closesAt: answering.closesAt,
		isLate: answering.isLate,
		isRehearsal: answering.isRehearsal,
		timeZone: answering.timeZone,
		minutes: definition.minutes,
		steps: listSteps(definition, plantings, answers).length,
		begun: response !== null,
		receiptCode: response?.receiptCode ?? null,
		openStep: findOpenStep(definition, plantings, answers)?.key ?? null,
	};
}

export async function action({ context, params }: Route.ActionArgs) {
	const grower = requireGrower(context, params);
	const language = getLanguage(context);
	const outcome = await grower.transaction((trx) =>
		startResponse(trx, grower.viewer, params, { language, pledgeVersion }),
	);
	if (outcome === "not_found") throw refusal("survey_not_found");
	if (outcome === "closed") throw refusal("survey_closed");
	const { definition, plantings, answers } = await getAnswering(context, params);
	const step = findOpenStep(definition, plantings, answers);
	const next = step
		? href("/answer/:surveyId/:operationId/ask/:screen", { ...params, screen: step.key })
		: href("/answer/:surveyId/:operationId/review", params);
	return redirect(next, 303);
}

export default function Start({ loaderData, params }: Route.ComponentProps) {
	const { t, i18n } = useTranslation("grower");
	const format = useFormat();
	const { title, season, operationName, closesAt, isLate, timeZone, minutes, steps, begun, receiptCode, openStep } =
		loaderData;
	const values = { survey: wordsIn(title, i18n.language), season, operation: operationName };
	return (
		<Page title={t("start.title", values)} lead={t("start.lead", values)}>
			{loaderData.isRehearsal && <RehearsalNotice />}
			{isLate && <LateNotice />}
			{receiptCode && !isLate && (
				<Notice tone="info" title={t("start.sentTitle")}>
					<p>{t("start.sent", { code: receiptCode, closes: format.moment(closesAt, timeZone) })}</p>
				</Notice>
			)}
			<p>
				{t("start.steps", { count: steps, value: format.number(steps) })}{" "}
				{t("start.minutes", { count: minutes, value: format.number(minutes) })}
			</p>
			{!isLate && <p className="mt-3">{t("start.until", { closes: format.moment(closesAt, timeZone) })}</p>}
			<Section title={t("pledge.title")}>
				<Pledge />
			</Section>
			{begun ? (
				<div className="mt-6 flex flex-wrap gap-3">
					{openStep && (
						<ButtonLink to={href("/answer/:surveyId/:operationId/ask/:screen", { ...params, screen: openStep })}>
							{t("start.goOn")}
						</ButtonLink>
					)}
					<ButtonLink
						kind={openStep ? "secondary" : "primary"}
						to={href("/answer/:surveyId/:operationId/review", params)}
					>
						{t("start.review")}
					</ButtonLink>
				</div>
			) : (
				<Form method="post" className="mt-6">
					<p className="mb-4">{t("pledge.agreeing")}</p>
					<Button>{t("start.begin")}</Button>
				</Form>
			)}
			<PhonePart {...loaderData.phone} stage="start" />
		</Page>
	);
}

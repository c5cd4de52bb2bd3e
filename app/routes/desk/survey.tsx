import type { ReactNode } from "react";
import { useTranslation } from "react-i18next";
import { data, Form, href, redirect } from "react-router";
import { z } from "zod";
import type { Route } from "./+types/survey";
import { requireAssociate } from "#app/auth/guard.server.ts";
import { sessionContext } from "#app/auth/session.server.ts";
import { countMailings, sendInvitations, sendReminders } from "#app/collect/invitations.server.ts";
import { closeSurvey, openSurvey } from "#app/collect/survey-opening.server.ts";
import { findSurvey } from "#app/collect/surveys.server.ts";
import { Confirm } from "#app/components/confirm.tsx";
import { DescriptionList } from "#app/components/description-list.tsx";
import { Notice } from "#app/components/notice.tsx";
import { Section } from "#app/components/section.tsx";
import { TallyCount } from "#app/components/tally-count.tsx";
import { useFormat } from "#app/i18n/use-format.ts";
import { parseForm } from "#app/lib/parse-form.ts";
import { refusal } from "#app/lib/refusal.ts";

export async function loader({ context, params }: Route.LoaderArgs) {
	const desk = requireAssociate(context);
	const found = await desk.transaction(async (trx) => {
		const survey = await findSurvey(trx, desk.viewer, params.surveyId);
		return survey && { survey, mailings: await countMailings(trx, desk.viewer, params.surveyId) };
	});
	if (!found) throw refusal("survey_not_found");
	return found;
}

const Step = z.discriminatedUnion("step", [
	z.object({ step: z.literal("open") }),
	z.object({ step: z.literal("close") }),
	z.object({ step: z.literal("invite") }),
	z.object({ step: z.literal("remind"), wave: z.coerce.number().int().min(1) }),
]);

export async function action({ context, params, request }: Route.ActionArgs) {
	const desk = requireAssociate(context);
	const form = parseForm(Step, await request.formData());
	if (!form.ok) throw refusal("form_not_understood");
	const { viewer } = desk;
	const { surveyId } = params;
	const outcome = await desk.transaction(async (trx) => {
		if (form.value.step === "open") return openSurvey(trx, viewer, surveyId);
		if (form.value.step === "close") return closeSurvey(trx, viewer, surveyId);
		if (form.value.step === "invite") return sendInvitations(trx, viewer, surveyId);
		return sendReminders(trx, viewer, surveyId, form.value.wave);
	});
	if (outcome === "not_found") throw refusal("survey_not_found");
	if (typeof outcome === "string" && !["opened", "closed", "already_open", "already_closed"].includes(outcome)) {
		return data({ refused: outcome }, { status: 409 });
	}
	const toast =
		typeof outcome === "string"
			? { key: `desk:survey.toast.${form.value.step}` }
			: { key: "desk:survey.toast.queued", values: { count: outcome.queued } };
	context.get(sessionContext).flash("toast", toast);
	return redirect(href("/desk/surveys/:surveyId", params), 303);
}

export default function SurveyPage({ loaderData, actionData }: Route.ComponentProps) {
	const { survey, mailings } = loaderData;
	const { t } = useTranslation("desk");
	const format = useFormat();
	return (
		<>
			{actionData && <Notice tone="attention">{t(`survey.refused.${actionData.refused}`)}</Notice>}
			{survey.state !== "draft" && (
				<TallyCount count={survey.answered} of={survey.inFrame} label={t("survey.answersIn")} />
			)}
			<DescriptionList
				items={[
					{ term: t("surveys.state"), detail: t(`common:surveyState.${survey.state}`) },
					{ term: t("surveys.closes"), detail: format.moment(survey.closesAt, survey.timeZone) },
					{
						term: t("survey.crops"),
						detail: format.list(survey.cropKeys.map((crop) => t(`common:crop.${crop}`))),
					},
					{
						term: t("survey.states"),
						detail: format.list(survey.stateFips.map((state) => t(`common:state.${state}`))),
					},
					{ term: t("survey.invited"), detail: format.number(mailings.invited) },
					{ term: t("survey.withoutAddress"), detail: format.number(mailings.withoutAddress) },
				]}
			/>
			<Section title={t("survey.next")}>
				<Form method="post" className="flex flex-wrap gap-4">
					{survey.state === "draft" && <StepButton step="open" />}
					{survey.state === "open" && mailings.toInvite > 0 && <StepButton step="invite" count={mailings.toInvite} />}
					{survey.state === "open" && mailings.toRemind > 0 && (
						<StepButton step="remind" count={mailings.toRemind}>
							<input type="hidden" name="wave" value={mailings.reminderWave} />
						</StepButton>
					)}
					{survey.state === "open" && survey.mayManage && <StepButton step="close" />}
				</Form>
				{survey.state === "closed" && <p>{t("survey.closedNext")}</p>}
			</Section>
		</>
	);
}

type StepButtonProps = { step: "open" | "close" | "invite" | "remind"; count?: number; children?: ReactNode };

function StepButton({ step, count = 0, children }: StepButtonProps) {
	const { t } = useTranslation("desk");
	return (
		<Confirm
			trigger={t(`survey.${step}.button`)}
			title={t(`survey.${step}.title`)}
			body={t(`survey.${step}.body`, { count })}
			confirmLabel={t(`survey.${step}.confirm`)}
			name="step"
			value={step}
		>
			{children}
		</Confirm>
	);
}

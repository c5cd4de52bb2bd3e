import type { ReactNode } from "react";
import { useTranslation } from "react-i18next";
import { data, Form, href, Link, redirect } from "react-router";
import { z } from "zod";
import type { Route } from "./+types/survey";
import { requireAssociate } from "#app/auth/guard.server.ts";
import type { Trx } from "#app/auth/scope.server.ts";
import { sessionContext } from "#app/auth/session.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { countLeftOut, listFrameParts } from "#app/collect/frame-parts.server.ts";
import {
	countInvited,
	countMailings,
	countWithoutAddress,
	sendInvitations,
	sendReminders,
} from "#app/collect/invitations.server.ts";
import { readClosing, wallClockOf } from "#app/collect/survey-closing.ts";
import { ClosingForm } from "#app/collect/survey-draft.schema.ts";
import { archiveSurvey, copySurvey } from "#app/collect/survey-life.server.ts";
import { discardDraft } from "#app/collect/survey-mending.server.ts";
import { closeSurvey, extendSurvey, openSurvey } from "#app/collect/survey-opening.server.ts";
import { findSurvey } from "#app/collect/surveys.server.ts";
import { Confirm } from "#app/components/confirm.tsx";
import { DescriptionList } from "#app/components/description-list.tsx";
import { ErrorSummary } from "#app/components/error-summary.tsx";
import { Notice } from "#app/components/notice.tsx";
import { Section } from "#app/components/section.tsx";
import { TallyCount } from "#app/components/tally-count.tsx";
import { useFormat } from "#app/i18n/use-format.ts";
import { lookAgain } from "#app/lib/look-again.ts";
import { type FormValues, parseForm } from "#app/lib/parse-form.ts";
import { refusal } from "#app/lib/refusal.ts";
import { closesWords } from "./parts/clock-words.ts";
import { ClosingPart, closingLabels } from "./parts/closing-part.tsx";
import { FrameParts } from "./parts/frame-parts.tsx";

export async function loader({ context, params }: Route.LoaderArgs) {
	const desk = requireAssociate(context);
	const found = await desk.transaction(async (trx) => {
		const survey = await findSurvey(trx, desk.viewer, params.surveyId);
		if (!survey) return undefined;
		const { viewer } = desk;
		return {
			survey,
			mailings: {
				...(await countMailings(trx, viewer, params.surveyId)),
				invited: await countInvited(trx, viewer, params.surveyId),
				withoutAddress: await countWithoutAddress(trx, viewer, params.surveyId),
			},
			frame: await listFrameParts(trx, viewer, survey),
			leftOut: survey.state === "draft" ? await countLeftOut(trx, viewer, survey) : 0,
		};
	});
	if (!found) throw refusal("survey_not_found");
	return { ...found, closing: wallClockOf(found.survey.closesAt, found.survey.timeZone) };
}

const Step = z.discriminatedUnion("step", [
	z.object({ step: z.literal("open") }),
	z.object({ step: z.literal("close") }),
	z.object({ step: z.literal("copy") }),
	z.object({ step: z.literal("discard") }),
	z.object({ step: z.enum(["archive", "take_out"]) }),
	z.object({ step: z.literal("invite") }),
	z.object({ step: z.literal("remind"), wave: z.coerce.number().int().min(1) }),
	ClosingForm.extend({ step: z.literal("extend") }),
]);
type Step = z.infer<typeof Step>;

export async function action({ context, params, request }: Route.ActionArgs) {
	const desk = requireAssociate(context);
	const form = parseForm(Step, await request.formData());
	if (!form.ok && form.values.step !== "extend") throw refusal("form_not_understood");
	if (!form.ok) return data({ refused: null, values: form.values, problems: form.problems }, { status: 400 });

	const { value: step } = form;
	const outcome = await desk.transaction((trx) => takeStep(trx, desk.viewer, params.surveyId, step));
	if (outcome === "not_found") throw refusal("survey_not_found");
	const values: FormValues = step;
	if (typeof outcome === "object" && "problem" in outcome)
		return data({ refused: null, values, problems: [outcome.problem] }, { status: 400 });
	if (typeof outcome === "string" && !settled[step.step].includes(outcome))
		return data({ refused: outcome, values, problems: [] }, { status: 409 });
	if (typeof outcome === "object" && "surveyId" in outcome) {
		context.get(sessionContext).flash("toast", { key: "desk:survey.toast.copy" });
		return redirect(href("/desk/surveys/:surveyId", { surveyId: outcome.surveyId }), 303);
	}
	const toast =
		typeof outcome === "string"
			? { key: `desk:survey.toast.${step.step}` }
			: { key: "desk:survey.toast.queued", values: { count: outcome.queued } };
	context.get(sessionContext).flash("toast", toast);
	if (outcome === "discarded") return redirect(href("/desk/surveys"), 303);
	return redirect(href("/desk/surveys/:surveyId", params), 303);
}

async function takeStep(trx: Trx, viewer: Associate, surveyId: string, step: Step) {
	switch (step.step) {
		case "open":
			return openSurvey(trx, viewer, surveyId);
		case "close":
			return closeSurvey(trx, viewer, surveyId);
		case "copy":
			return copySurvey(trx, viewer, surveyId);
		case "discard":
			return discardDraft(trx, viewer, surveyId);
		case "archive":
		case "take_out":
			return archiveSurvey(trx, viewer, surveyId, step.step === "archive");
		case "invite":
			return sendInvitations(trx, viewer, surveyId);
		case "remind":
			return sendReminders(trx, viewer, surveyId, step.wave);
		case "extend": {
			const survey = await findSurvey(trx, viewer, surveyId);
			if (!survey) return "not_found";
			const closing = readClosing(step, survey.timeZone, new Date());
			return "problem" in closing ? closing : extendSurvey(trx, viewer, surveyId, closing.closesAt);
		}
	}
}

/** What leaves a step done, also where it had been done before: pressed twice, it says the same. */
const settled: Record<Step["step"], string[]> = {
	open: ["opened", "already_open"],
	close: ["closed", "already_closed"],
	copy: [],
	discard: ["discarded"],
	archive: ["archived", "unchanged"],
	take_out: ["taken_out", "unchanged"],
	invite: [],
	remind: [],
	extend: ["extended", "unchanged"],
};

export const shouldRevalidate = lookAgain;

export default function SurveyPage({ loaderData, actionData }: Route.ComponentProps) {
	const { survey, mailings, closing, frame, leftOut } = loaderData;
	const mayChange = survey.state === "draft" && !survey.rehearsalOf && survey.statesNotHeld.length === 0;
	const { t } = useTranslation("desk");
	const format = useFormat();
	return (
		<>
			<ErrorSummary problems={actionData?.problems} labels={closingLabels(t)} />
			{actionData?.refused && <Notice tone="attention">{t(`survey.refused.${actionData.refused}`)}</Notice>}
			{mayChange && (
				<Notice tone="info" title={t("rehearsal.offer")}>
					<Link to={href("/desk/surveys/:surveyId/rehearsal", { surveyId: survey.surveyId })}>
						{t("rehearsal.offerLink")}
					</Link>
				</Notice>
			)}
			{survey.archivedAt && <Notice tone="info">{t("survey.isArchived")}</Notice>}
			{survey.state !== "draft" && (
				<div className="mb-5">
					<TallyCount count={survey.answered} of={survey.inFrame} label={t("survey.answersIn")} />
				</div>
			)}
			<DescriptionList
				items={[
					{ term: t("surveys.state"), detail: t(`common:surveyState.${survey.state}`) },
					{ term: t("surveys.closes"), detail: closesWords(survey, { t, format }) },
					{
						term: t("survey.crops"),
						detail: format.list(survey.cropKeys.map((crop) => t(`common:crop.${crop}`))),
					},
					{
						term: t("survey.states"),
						detail: format.list(survey.stateFips.map((state) => t(`common:state.${state}`))),
					},
					{ term: t("survey.invited"), detail: format.number(mailings.invited) },
					{
						term: t("survey.withoutAddress"),
						detail:
							mailings.withoutAddress === 0 ? (
								format.number(0)
							) : (
								<Link
									to={`${href("/desk/surveys/:surveyId/responses", { surveyId: survey.surveyId })}?show=no_address`}
									className="print-plain"
								>
									{format.number(mailings.withoutAddress)}
								</Link>
							),
					},
				]}
			/>
			{mayChange && (
				<p className="mt-3">
					<Link to={href("/desk/surveys/:surveyId/edit", { surveyId: survey.surveyId })}>{t("surveyEdit.link")}</Link>
				</p>
			)}
			<FrameParts
				surveyId={survey.surveyId}
				parts={frame}
				frozen={survey.openedAt && format.moment(survey.openedAt, survey.timeZone)}
				leftOut={leftOut}
			/>
			<Section title={t("survey.next")}>
				<Form method="post" className="flex flex-wrap gap-4">
					{survey.state === "draft" && <StepButton step="open" />}
					{mayChange && <StepButton step="discard" />}
					{survey.state === "open" && mailings.toInvite > 0 && <StepButton step="invite" count={mailings.toInvite} />}
					{survey.state === "open" && mailings.toRemind > 0 && (
						<StepButton step="remind" count={mailings.toRemind}>
							<input type="hidden" name="wave" value={mailings.reminderWave} />
						</StepButton>
					)}
					{survey.state === "open" && survey.mayManage && <StepButton step="close" />}
				</Form>
				{survey.state === "closed" && !survey.rehearsalOf && <p>{t("survey.closedNext")}</p>}
			</Section>
			{survey.state !== "draft" && !survey.rehearsalOf && (
				<Section title={t("survey.afterwards")}>
					<Form method="post" className="flex flex-wrap gap-4">
						<StepButton step="copy" />
						{survey.state === "closed" && survey.mayManage && (
							<StepButton step={survey.archivedAt ? "take_out" : "archive"} />
						)}
					</Form>
				</Section>
			)}
			{!survey.closedAt && survey.mayManage && (
				<ClosingPart closing={closing} survey={survey} values={actionData?.values} problems={actionData?.problems} />
			)}
		</>
	);
}

type StepButtonProps = { step: Exclude<Step["step"], "extend">; count?: number; children?: ReactNode };

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
			danger={step === "discard"}
		>
			{children}
		</Confirm>
	);
}

import { useTranslation } from "react-i18next";
import { data, Form, href, redirect } from "react-router";
import { z } from "zod";
import type { Route } from "./+types/rehearsal";
import { requireAssociate } from "#app/auth/guard.server.ts";
import type { Trx } from "#app/auth/scope.server.ts";
import { sessionContext } from "#app/auth/session.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import {
	discardRehearsal,
	findRehearsal,
	linkTestGrower,
	listTestGrowers,
	rehearseSurvey,
} from "#app/collect/rehearsal.server.ts";
import { findSurvey } from "#app/collect/surveys.server.ts";
import { Button, ButtonLink } from "#app/components/button.tsx";
import { Confirm } from "#app/components/confirm.tsx";
import { NotDone, Notice } from "#app/components/notice.tsx";
import { Section } from "#app/components/section.tsx";
import { getInstance } from "#app/i18n/middleware.server.ts";
import { lookAgain } from "#app/lib/look-again.ts";
import { parseForm } from "#app/lib/parse-form.ts";
import { refusal } from "#app/lib/refusal.ts";
import { TestGrowers } from "./parts/test-growers.tsx";

export async function loader({ context, params }: Route.LoaderArgs) {
	const desk = requireAssociate(context);
	const found = await desk.transaction(async (trx) => {
		const survey = await findSurvey(trx, desk.viewer, params.surveyId);
		if (!survey) return undefined;
		const { surveyId, state, rehearsalOf, statesNotHeld } = survey;
		return {
			state,
			rehearsalOf,
			mayRehearse: statesNotHeld.length === 0,
			rehearsalId: rehearsalOf ? null : await findRehearsal(trx, desk.viewer, surveyId),
			growers: rehearsalOf ? await listTestGrowers(trx, desk.viewer, surveyId) : [],
		};
	});
	if (!found) throw refusal("survey_not_found");
	return found;
}

const Step = z.discriminatedUnion("step", [
	z.object({ step: z.enum(["make", "anew", "discard"]) }),
	z.object({ step: z.literal("link"), operationId: z.guid() }),
]);
type Step = z.infer<typeof Step>;

/** Makes a draft's rehearsal; at the rehearsal itself tells a grower's link, makes it anew, or throws it away. */
export async function action({ context, params, request }: Route.ActionArgs) {
	const desk = requireAssociate(context);
	const form = parseForm(Step, await request.formData());
	if (!form.ok) throw refusal("form_not_understood");
	const { value: step } = form;
	const { t } = getInstance(context);
	const nameOf = (number: number) => t("desk:rehearsal.growerName", { number });
	const outcome = await desk.transaction((trx) => takeStep(trx, desk.viewer, params.surveyId, { step, nameOf }));
	if (outcome === "not_found") throw refusal("survey_not_found");
	if (typeof outcome === "string") return data({ refused: outcome, link: null }, { status: 409 });
	if ("token" in outcome) {
		const link = new URL(href("/r/:token", { token: outcome.token }), request.url).pathname;
		return data({ refused: null, link: { name: outcome.name, to: link } });
	}
	const surveyId = "rehearsalId" in outcome ? outcome.rehearsalId : outcome.surveyId;
	context.get(sessionContext).flash("toast", { key: `desk:rehearsal.toast.${step.step}` });
	return redirect(href("/desk/surveys/:surveyId/rehearsal", { surveyId }), 303);
}

type Taken = { step: Step; nameOf: (number: number) => string };

async function takeStep(trx: Trx, viewer: Associate, surveyId: string, { step, nameOf }: Taken) {
	if (step.step === "link") return linkTestGrower(trx, viewer, { surveyId, operationId: step.operationId });
	if (step.step === "discard") return discardRehearsal(trx, viewer, surveyId);
	if (step.step === "make") return rehearseSurvey(trx, viewer, surveyId, nameOf);
	const gone = await discardRehearsal(trx, viewer, surveyId);
	return typeof gone === "string" ? gone : rehearseSurvey(trx, viewer, gone.surveyId, nameOf);
}

export const shouldRevalidate = lookAgain;

export default function Rehearsal({ loaderData, actionData }: Route.ComponentProps) {
	const { t } = useTranslation("desk");
	const { rehearsalOf } = loaderData;
	return (
		<>
			{actionData?.refused && (
				<NotDone answer={actionData} tone="attention">
					{t(`rehearsal.refused.${actionData.refused}`)}
				</NotDone>
			)}
			{rehearsalOf ? <Running {...loaderData} link={actionData?.link ?? null} /> : <Offer {...loaderData} />}
		</>
	);
}

type LoaderData = Route.ComponentProps["loaderData"];

/** At the draft: what a rehearsal is, and the way to it. */
function Offer({ state, mayRehearse, rehearsalId }: LoaderData) {
	const { t } = useTranslation("desk");
	if (state !== "draft") return <p className="max-w-prose">{t("rehearsal.refused.not_a_draft")}</p>;
	return (
		<Section title={t("rehearsal.title")}>
			<p className="mb-4 max-w-prose">{t("rehearsal.lead")}</p>
			{!mayRehearse && <Notice tone="attention">{t("rehearsal.refused.states_not_held")}</Notice>}
			{mayRehearse && rehearsalId && (
				<ButtonLink to={href("/desk/surveys/:surveyId/rehearsal", { surveyId: rehearsalId })}>
					{t("rehearsal.goOn")}
				</ButtonLink>
			)}
			{mayRehearse && !rehearsalId && (
				<Form method="post">
					<Button name="step" value="make">
						{t("rehearsal.make")}
					</Button>
				</Form>
			)}
		</Section>
	);
}

type RunningProps = LoaderData & { link: { name: string; to: string } | null };

/** At the rehearsal: who answers, what to look at, and the way out. */
function Running({ growers, link, rehearsalOf }: RunningProps) {
	const { t } = useTranslation("desk");
	return (
		<>
			<Section title={t("rehearsal.growers")}>
				<p className="mb-4 max-w-prose">{t("rehearsal.growersLead")}</p>
				{link && (
					<NotDone answer={link} tone="info" title={t("rehearsal.linkTitle", { name: link.name })}>
						<a href={link.to} target="_blank" rel="noreferrer" className="wrap-anywhere">
							{t("rehearsal.linkOpen", { name: link.name })}
						</a>
						<p className="mt-1">{t("rehearsal.linkBody")}</p>
					</NotDone>
				)}
				<TestGrowers growers={growers} />
			</Section>
			<Section title={t("rehearsal.after")}>
				<p className="mb-4 max-w-prose">{t("rehearsal.afterLead")}</p>
				<Form method="post" className="flex flex-wrap gap-4">
					{(["anew", "discard"] as const).map((step) => (
						<Confirm
							key={step}
							trigger={t(`rehearsal.${step}.button`)}
							title={t(`rehearsal.${step}.title`)}
							body={t(`rehearsal.${step}.body`)}
							confirmLabel={t(`rehearsal.${step}.button`)}
							name="step"
							value={step}
							danger={step === "discard"}
						/>
					))}
				</Form>
				<p className="mt-4">
					<ButtonLink kind="quiet" to={href("/desk/surveys/:surveyId", { surveyId: rehearsalOf ?? "" })}>
						{t("rehearsal.back")}
					</ButtonLink>
				</p>
			</Section>
		</>
	);
}

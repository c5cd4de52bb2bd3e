import { useEffect } from "react";
import { useTranslation } from "react-i18next";
import { data, Form, href, redirect, useRevalidator } from "react-router";
import { z } from "zod";
import type { Route } from "./+types/release";
import { logEvent } from "#app/auth/event-log.server.ts";
import { requireAssociate } from "#app/auth/guard.server.ts";
import type { Trx } from "#app/auth/scope.server.ts";
import { sessionContext } from "#app/auth/session.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { findRealSurvey } from "#app/collect/surveys.server.ts";
import { ButtonLink } from "#app/components/button.tsx";
import { Confirm } from "#app/components/confirm.tsx";
import { EmptyState } from "#app/components/empty-state.tsx";
import { ErrorSummary } from "#app/components/error-summary.tsx";
import { Notice } from "#app/components/notice.tsx";
import { DraftReport } from "#app/components/release/draft-report.tsx";
import { Section } from "#app/components/section.tsx";
import { TextField } from "#app/components/text-field.tsx";
import { wordsIn } from "#app/i18n/language.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import { readNetworkRules } from "#app/jobs/network-rules.server.ts";
import { queueJob } from "#app/jobs/queue.server.ts";
import { lookAgain } from "#app/lib/look-again.ts";
import { type FormValues, parseForm, type Problem } from "#app/lib/parse-form.ts";
import { refusal } from "#app/lib/refusal.ts";
import type { Words } from "#app/lib/words.ts";
import { ReasonForm } from "#app/release/decision.schema.ts";
import { DraftChoice, viewDraft } from "#app/release/draft-view.server.ts";
import { cancelDraft } from "#app/release/draft-progress.server.ts";
import { createDraft, findLatestDraft, findNewestEdition, findWithdrawal } from "#app/release/drafts.server.ts";
import { draftReportProps } from "./parts/draft-report-props.ts";
import { DraftUnderWay } from "./parts/draft-under-way.tsx";

export async function loader({ context, params, request }: Route.LoaderArgs) {
	const desk = requireAssociate(context);
	const choice = DraftChoice.parse(Object.fromEntries(new URL(request.url).searchParams));
	const found = await desk.transaction(async (trx) => {
		const survey = await findRealSurvey(trx, desk.viewer, params.surveyId);
		if (!survey) return undefined;
		const draft = await findLatestDraft(trx, desk.viewer, params.surveyId);
		const withdrawn = draft?.releaseId ? await findWithdrawal(trx, draft.releaseId) : null;
		const released = (await findNewestEdition(trx, params.surveyId)) !== null;
		return { state: survey.state, released, withdrawn, view: draft ? await viewDraft(trx, draft, choice) : null };
	});
	if (!found) throw refusal("survey_not_found");
	return found;
}

/** A first draft brings no reason along; one of a revision does. */
const DraftForm = z.discriminatedUnion("step", [
	z.object({ step: z.literal("draft") }),
	z.object({ step: z.literal("cancel") }),
	ReasonForm.extend({ step: z.literal("revise") }),
]);

export async function action({ context, params, request }: Route.ActionArgs) {
	const desk = requireAssociate(context);
	const form = parseForm(DraftForm, await request.formData());
	if (!form.ok) return data({ values: form.values, problems: form.problems, refused: null }, { status: 400 });
	const { value } = form;
	if (value.step === "cancel") {
		const stopped = await desk.transaction((trx) => stopDraft(trx, desk.viewer, params.surveyId));
		if (stopped === "not_found") throw refusal("survey_not_found");
		context.get(sessionContext).flash("toast", { key: `release:toast.${stopped}` });
		return redirect(href("/desk/surveys/:surveyId/release", params), 303);
	}
	const reason = value.step === "revise" ? { en: value.reasonEn, es: value.reasonEs } : null;
	const result = await desk.transaction(async (trx) => {
		if (!(await findRealSurvey(trx, desk.viewer, params.surveyId))) return { outcome: "not_found" } as const;
		const made = await createDraft(trx, desk.viewer, params.surveyId, await readNetworkRules(trx), reason);
		if (made.outcome !== "drafted") return made;
		const { releaseDraftId } = made;
		await queueJob(trx, "compute_release_draft", { releaseDraftId }, { maxAttempts: 3 });
		const subject = { subjectKind: "release_draft", subjectId: releaseDraftId, detail: { surveyId: params.surveyId } };
		await logEvent(trx, { personId: desk.viewer.personId, action: "release.drafted", ...subject });
		return made;
	});
	if (result.outcome === "not_found") throw refusal("survey_not_found");
	if (result.outcome !== "drafted")
		return data({ values: form.values, problems: [], refused: result.outcome }, { status: 409 });
	context.get(sessionContext).flash("toast", { key: "release:toast.queued" });
	return redirect(href("/desk/surveys/:surveyId/release", params), 303);
}

/** Stopping twice, or what has ended meanwhile, changes nothing. */
async function stopDraft(trx: Trx, viewer: Associate, surveyId: string) {
	if (!(await findRealSurvey(trx, viewer, surveyId))) return "not_found";
	const stopped = await cancelDraft(trx, viewer, surveyId);
	if (stopped.outcome === "cancelled") {
		const subject = { subjectKind: "release_draft", subjectId: stopped.releaseDraftId, detail: { surveyId } };
		await logEvent(trx, { personId: viewer.personId, action: "release.cancelled", ...subject });
	}
	return stopped.outcome;
}

export const shouldRevalidate = lookAgain;

export default function ReleasePage({ loaderData, actionData }: Route.ComponentProps) {
	const { t } = useTranslation("release");
	const { state, view, released } = loaderData;
	return (
		<>
			<ErrorSummary problems={actionData?.problems} labels={{ reasonEn: t("reason.en"), reasonEs: t("reason.es") }} />
			{actionData?.refused && <Notice tone="attention">{t(`refused.${actionData.refused}`)}</Notice>}
			{view ? <DraftPart view={view} withdrawn={loaderData.withdrawn} /> : <NoDraft state={state} />}
			{state === "closed" && !released && <DraftButton draft={view?.draft ?? null} />}
			{released && <RevisionForm draft={view?.draft ?? null} {...actionData} />}
		</>
	);
}

function NoDraft({ state }: { state: string }) {
	const { t } = useTranslation("release");
	return (
		<EmptyState title={t(state === "closed" ? "none.readyTitle" : "none.openTitle")}>
			{t(state === "closed" ? "none.readyBody" : "none.openBody")}
		</EmptyState>
	);
}

type LatestDraft = (Route.ComponentProps["loaderData"]["view"] & object)["draft"] | null;

/** What drafting does, and what else if the draft that is approved already loses its place by it. */
function useConfirmBody(draft: LatestDraft, body: string): string {
	const { t } = useTranslation("release");
	const format = useFormat();
	if (draft?.status !== "scheduled" || !draft.publishAt) return body;
	return `${t("draft.replacesApproved", { moment: format.moment(draft.publishAt, draft.timeZone) })} ${body}`;
}

function DraftButton({ draft }: { draft: LatestDraft }) {
	const { t } = useTranslation("release");
	const body = useConfirmBody(draft, t("draft.confirmBody"));
	return (
		<Form method="post" className="no-print mt-8">
			<Confirm
				trigger={t(draft ? "draft.again" : "draft.first")}
				title={t("draft.confirmTitle")}
				body={body}
				confirmLabel={t("draft.confirm")}
				name="step"
				value="draft"
			/>
		</Form>
	);
}

type RevisionFormProps = { draft: LatestDraft; values?: FormValues; problems?: Problem[] };

/** Drafts published figures anew. A draft of a revision that waits lends its reason to the next. */
function RevisionForm({ draft, values, problems }: RevisionFormProps) {
	const { t } = useTranslation("release");
	const reason = draft?.revisionReason;
	const body = useConfirmBody(draft, t("revision.confirmBody"));
	const field = (name: "reasonEn" | "reasonEs", label: string, standing?: string) => ({
		name,
		label,
		defaultValue: typeof values?.[name] === "string" ? values[name] : (standing ?? ""),
		problem: problems?.find((problem) => problem.field === name),
		multiline: true,
		rows: 3,
		maxLength: 600,
	});
	return (
		<Section title={t("revision.title")}>
			<Form method="post" noValidate className="no-print max-w-xl">
				<p className="mb-4">{t("revision.body")}</p>
				<TextField {...field("reasonEn", t("reason.en"), reason?.en)} help={t("revision.help")} />
				<TextField {...field("reasonEs", t("reason.es"), reason?.es)} />
				<Confirm
					trigger={t("revision.button")}
					title={t("revision.confirmTitle")}
					body={body}
					confirmLabel={t("revision.button")}
					name="step"
					value="revise"
				/>
			</Form>
		</Section>
	);
}

type DraftPartProps = { view: Route.ComponentProps["loaderData"]["view"] & object; withdrawn: Words | null };

function DraftPart({ view, withdrawn }: DraftPartProps) {
	const { t, i18n } = useTranslation("release");
	const format = useFormat();
	const { draft } = view;
	const state = withdrawn ? "withdrawn" : draft.status;
	const waiting = draft.status === "queued";
	useRefreshWhile(waiting);
	const report = draftReportProps(view);
	return (
		<>
			{/* Without scripts the page looks again by itself; with them a reload would take the reader's place away. */}
			{waiting && (
				<noscript>
					<meta httpEquiv="refresh" content="5" />
				</noscript>
			)}
			<Notice
				tone={draft.status === "audit_failed" || draft.status === "failed" ? "caution" : "info"}
				title={t(`status.${state}.title`)}
			>
				<output className="block">
					{t(`status.${state}.body`, {
						name: draft.draftedBy.displayName,
						moment: format.moment(draft.draftedAt),
						publishes: draft.publishAt ? format.moment(draft.publishAt, draft.timeZone) : "",
					})}
				</output>
				{withdrawn && <p className="mt-2">{wordsIn(withdrawn, i18n.language)}</p>}
				{draft.revisionReason && (
					<p className="mt-2">{t("revision.because", { reason: wordsIn(draft.revisionReason, i18n.language) })}</p>
				)}
				{draft.decisionNote && <p className="mt-2">{t("status.note", { note: draft.decisionNote })}</p>}
				{state === "approved" && (
					<p className="mt-3">
						<ButtonLink to={href("/desk/reports")} kind="secondary">
							{t("status.toReports")}
						</ButtonLink>
					</p>
				)}
			</Notice>
			{(waiting || draft.status === "failed") && <DraftUnderWay progress={waiting ? draft.progress : null} />}
			{report && (
				<>
					<p className="text-attention font-bold">{draft.status === "approved" ? null : t("estimates.mark")}</p>
					<DraftReport {...report} />
				</>
			)}
		</>
	);
}

/** Asks again every two seconds while a job works, and only then. */
function useRefreshWhile(waiting: boolean) {
	const { revalidate } = useRevalidator();
	useEffect(() => {
		if (!waiting) return;
		const timer = setInterval(() => void revalidate(), 2_000);
		return () => clearInterval(timer);
	}, [waiting, revalidate]);
}

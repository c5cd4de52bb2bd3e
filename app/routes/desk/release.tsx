import { useEffect } from "react";
import { useTranslation } from "react-i18next";
import { data, Form, href, redirect, useRevalidator } from "react-router";
import type { Route } from "./+types/release";
import { logEvent } from "#app/auth/event-log.server.ts";
import { requireAssociate } from "#app/auth/guard.server.ts";
import { sessionContext } from "#app/auth/session.server.ts";
import { findSurvey } from "#app/collect/surveys.server.ts";
import { ButtonLink } from "#app/components/button.tsx";
import { Confirm } from "#app/components/confirm.tsx";
import { EmptyState } from "#app/components/empty-state.tsx";
import { Notice } from "#app/components/notice.tsx";
import { DraftReport } from "#app/components/release/draft-report.tsx";
import { useFormat } from "#app/i18n/use-format.ts";
import { networkRules } from "#app/jobs/network-rules.ts";
import { queueJob } from "#app/jobs/queue.server.ts";
import { refusal } from "#app/lib/refusal.ts";
import { DraftChoice, viewDraft } from "#app/release/draft-view.server.ts";
import { createDraft, findLatestDraft } from "#app/release/drafts.server.ts";
import { draftReportProps } from "./parts/draft-report-props.ts";

export async function loader({ context, params, request }: Route.LoaderArgs) {
	const desk = requireAssociate(context);
	const choice = DraftChoice.parse(Object.fromEntries(new URL(request.url).searchParams));
	const found = await desk.transaction(async (trx) => {
		const survey = await findSurvey(trx, desk.viewer, params.surveyId);
		if (!survey) return undefined;
		const draft = await findLatestDraft(trx, desk.viewer, params.surveyId);
		return { state: survey.state, view: draft ? await viewDraft(trx, draft, choice) : null };
	});
	if (!found) throw refusal("survey_not_found");
	return found;
}

export async function action({ context, params }: Route.ActionArgs) {
	const desk = requireAssociate(context);
	const result = await desk.transaction(async (trx) => {
		if (!(await findSurvey(trx, desk.viewer, params.surveyId))) return { outcome: "not_found" } as const;
		const made = await createDraft(trx, desk.viewer, params.surveyId, networkRules);
		if (made.outcome !== "drafted") return made;
		const { releaseDraftId } = made;
		await queueJob(trx, "compute_release_draft", { releaseDraftId }, { maxAttempts: 3 });
		const subject = { subjectKind: "release_draft", subjectId: releaseDraftId, detail: { surveyId: params.surveyId } };
		await logEvent(trx, { personId: desk.viewer.personId, action: "release.drafted", ...subject });
		return made;
	});
	if (result.outcome === "not_found") throw refusal("survey_not_found");
	if (result.outcome !== "drafted") return data({ refused: result.outcome }, { status: 409 });
	context.get(sessionContext).flash("toast", { key: "release:toast.queued" });
	return redirect(href("/desk/surveys/:surveyId/release", params), 303);
}

export default function ReleasePage({ loaderData, actionData }: Route.ComponentProps) {
	const { t } = useTranslation("release");
	const { state, view } = loaderData;
	return (
		<>
			{actionData && <Notice tone="attention">{t(`refused.${actionData.refused}`)}</Notice>}
			{view ? <DraftPart view={view} /> : <NoDraft state={state} />}
			{state === "closed" && view?.draft.status !== "approved" && <DraftButton again={view !== null} />}
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

function DraftButton({ again }: { again: boolean }) {
	const { t } = useTranslation("release");
	return (
		<Form method="post" className="no-print mt-8">
			<Confirm
				trigger={t(again ? "draft.again" : "draft.first")}
				title={t("draft.confirmTitle")}
				body={t("draft.confirmBody")}
				confirmLabel={t("draft.confirm")}
			/>
		</Form>
	);
}

function DraftPart({ view }: { view: Route.ComponentProps["loaderData"]["view"] & object }) {
	const { t } = useTranslation("release");
	const format = useFormat();
	const { draft } = view;
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
				title={t(`status.${draft.status}.title`)}
			>
				<output className="block">
					{t(`status.${draft.status}.body`, {
						name: draft.draftedBy.displayName,
						moment: format.moment(draft.draftedAt),
					})}
				</output>
				{draft.decisionNote && <p className="mt-2">{t("status.note", { note: draft.decisionNote })}</p>}
				{draft.status === "approved" && (
					<p className="mt-3">
						<ButtonLink to={href("/desk/reports")} kind="secondary">
							{t("status.toReports")}
						</ButtonLink>
					</p>
				)}
			</Notice>
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

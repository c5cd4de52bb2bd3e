import { useTranslation } from "react-i18next";
import { data, Form, href, redirect } from "react-router";
import { z } from "zod";
import type { Route } from "./+types/release";
import { logEvent } from "#app/auth/event-log.server.ts";
import { requireCoordinator } from "#app/auth/guard.server.ts";
import { sessionContext } from "#app/auth/session.server.ts";
import { Button, ButtonLink } from "#app/components/button.tsx";
import { Confirm } from "#app/components/confirm.tsx";
import { ErrorSummary } from "#app/components/error-summary.tsx";
import { Notice } from "#app/components/notice.tsx";
import { Page } from "#app/components/page.tsx";
import { DraftReport } from "#app/components/release/draft-report.tsx";
import { Section } from "#app/components/section.tsx";
import { TextField } from "#app/components/text-field.tsx";
import { wordsIn } from "#app/i18n/language.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import { queueJob } from "#app/jobs/queue.server.ts";
import { env } from "#app/lib/env.server.ts";
import { parseForm } from "#app/lib/parse-form.ts";
import { refusal } from "#app/lib/refusal.ts";
import { DraftChoice, viewDraft } from "#app/release/draft-view.server.ts";
import { findDraft, rejectDraft } from "#app/release/drafts.server.ts";
import { publishRelease } from "#app/release/publish.server.ts";
import { draftReportProps } from "../desk/parts/draft-report-props.ts";

const Decision = z.discriminatedUnion("decision", [
	z.object({ decision: z.literal("approve") }),
	z.object({
		decision: z.literal("reject"),
		note: z.string({ error: "empty" }).trim().min(1, "empty").max(2000, "too_long"),
	}),
]);

export async function loader({ context, params, request }: Route.LoaderArgs) {
	const network = requireCoordinator(context);
	if (!z.uuid().safeParse(params.draftId).success) throw refusal("release_not_found");
	const choice = DraftChoice.parse(Object.fromEntries(new URL(request.url).searchParams));
	const view = await network.transaction(async (trx) => {
		const draft = await findDraft(trx, network.viewer, params.draftId);
		return draft && viewDraft(trx, draft, choice);
	});
	if (!view) throw refusal("release_not_found");
	return { view, own: view.draft.draftedBy.personId === network.viewer.personId };
}

export async function action({ context, params, request }: Route.ActionArgs) {
	const network = requireCoordinator(context);
	if (!z.uuid().safeParse(params.draftId).success) throw refusal("release_not_found");
	const form = parseForm(Decision, await request.formData());
	if (!form.ok) return data({ values: form.values, problems: form.problems, refused: null }, { status: 400 });

	const decided =
		form.value.decision === "approve"
			? await approve(network, params.draftId)
			: await reject(network, params.draftId, form.value.note);
	if (decided.outcome === "not_found") throw refusal("release_not_found");
	if (decided.outcome !== "published" && decided.outcome !== "rejected") {
		return data({ values: {}, problems: [], refused: decided.outcome }, { status: 409 });
	}
	const toast =
		decided.outcome === "published"
			? { key: "release:toast.published", values: { number: decided.number } }
			: { key: "release:toast.rejected" };
	context.get(sessionContext).flash("toast", toast);
	return redirect(href("/network/releases/:draftId", params), 303);
}

type Network = ReturnType<typeof requireCoordinator>;

function approve(network: Network, draftId: string) {
	return network.transaction(async (trx) => {
		const outcome = await publishRelease(trx, network.viewer, draftId, env().CODE_VERSION);
		if (outcome.outcome === "published") {
			const { releaseId, number } = outcome;
			const subject = { subjectKind: "release", subjectId: releaseId, detail: { number } };
			await logEvent(trx, { personId: network.viewer.personId, action: "release.published", ...subject });
			await queueJob(trx, "thank_growers", { releaseDraftId: draftId }, { jobKey: `thank_growers:${draftId}` });
		}
		return outcome;
	});
}

function reject(network: Network, draftId: string, note: string) {
	return network.transaction(async (trx) => {
		const outcome = await rejectDraft(trx, network.viewer, draftId, note);
		if (outcome === "rejected") {
			const subject = { subjectKind: "release_draft", subjectId: draftId };
			await logEvent(trx, { personId: network.viewer.personId, action: "release.rejected", ...subject });
		}
		return { outcome } as { outcome: "rejected" | "not_waiting" };
	});
}

export default function ReleaseReview({ loaderData, actionData }: Route.ComponentProps) {
	const { t, i18n } = useTranslation("release");
	const format = useFormat();
	const { view, own } = loaderData;
	const { draft } = view;
	const report = draftReportProps(view);
	const name = { title: wordsIn(draft.title, i18n.language), season: draft.season };
	return (
		<Page
			title={t("review.title", name)}
			lead={t("review.lead", { name: draft.draftedBy.displayName, moment: format.moment(draft.draftedAt) })}
		>
			<ErrorSummary problems={actionData?.problems} labels={{ note: t("review.note") }} />
			{actionData?.refused && <Notice tone="attention">{t(`refused.${actionData.refused}`)}</Notice>}
			<Notice tone={draft.status === "audited" ? "attention" : "info"} title={t(`review.state.${draft.status}`)}>
				{t(`review.explain.${draft.status}`)}
				{draft.status === "approved" && (
					<p className="mt-3">
						<ButtonLink to={href("/map")} kind="secondary">
							{t("review.toMap")}
						</ButtonLink>
					</p>
				)}
			</Notice>
			{report && <DraftReport {...report} />}
			{draft.status === "audited" &&
				(own ? <Notice tone="attention">{t("refused.own_draft")}</Notice> : <DecisionForms actionData={actionData} />)}
		</Page>
	);
}

function DecisionForms({ actionData }: Pick<Route.ComponentProps, "actionData">) {
	const { t } = useTranslation("release");
	const typed: unknown = actionData && "note" in actionData.values ? actionData.values.note : "";
	return (
		<Section title={t("review.decide")}>
			<Form method="post" className="mb-8">
				<Confirm
					trigger={t("review.approve")}
					title={t("review.approveTitle")}
					body={t("review.approveBody")}
					confirmLabel={t("review.approveConfirm")}
					name="decision"
					value="approve"
				/>
			</Form>
			<Form method="post" className="max-w-xl">
				<TextField
					name="note"
					label={t("review.note")}
					help={t("review.noteHelp")}
					multiline
					rows={4}
					maxLength={2000}
					defaultValue={typeof typed === "string" ? typed : ""}
					problem={actionData?.problems.find((problem) => problem.field === "note")}
				/>
				<Button kind="secondary" name="decision" value="reject">
					{t("review.reject")}
				</Button>
			</Form>
		</Section>
	);
}

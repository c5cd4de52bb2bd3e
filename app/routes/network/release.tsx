import { useTranslation } from "react-i18next";
import { data, href, redirect } from "react-router";
import { z } from "zod";
import type { Route } from "./+types/release";
import { requireCoordinator } from "#app/auth/guard.server.ts";
import { sessionContext } from "#app/auth/session.server.ts";
import { wallClockOf } from "#app/collect/survey-closing.ts";
import { ButtonLink } from "#app/components/button.tsx";
import { ErrorSummary } from "#app/components/error-summary.tsx";
import { Notice } from "#app/components/notice.tsx";
import { Page } from "#app/components/page.tsx";
import { DraftReport } from "#app/components/release/draft-report.tsx";
import { wordsIn } from "#app/i18n/language.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import { type Decided, decideRelease } from "#app/jobs/decide-release.server.ts";
import { lookAgain } from "#app/lib/look-again.ts";
import { parseForm } from "#app/lib/parse-form.ts";
import { refusal } from "#app/lib/refusal.ts";
import { Decision } from "#app/release/decision.schema.ts";
import { DraftChoice, viewDraft } from "#app/release/draft-view.server.ts";
import { findDraft, findWithdrawal } from "#app/release/drafts.server.ts";
import { draftReportProps } from "../desk/parts/draft-report-props.ts";
import { DecisionForms, decisionLabels, UnscheduleForm, WithdrawForm } from "./parts/decision-forms.tsx";

export async function loader({ context, params, request }: Route.LoaderArgs) {
	const network = requireCoordinator(context);
	if (!z.uuid().safeParse(params.draftId).success) throw refusal("release_not_found");
	const choice = DraftChoice.parse(Object.fromEntries(new URL(request.url).searchParams));
	const found = await network.transaction(async (trx) => {
		const draft = await findDraft(trx, network.viewer, params.draftId);
		if (!draft) return undefined;
		const withdrawn = draft.releaseId ? await findWithdrawal(trx, draft.releaseId) : null;
		return { view: await viewDraft(trx, draft, choice), withdrawn };
	});
	if (!found) throw refusal("release_not_found");
	const { draft } = found.view;
	return {
		...found,
		own: draft.draftedBy.personId === network.viewer.personId,
		tomorrow: wallClockOf(new Date(Date.now() + 86_400_000), draft.timeZone).on,
	};
}

export async function action({ context, params, request }: Route.ActionArgs) {
	const network = requireCoordinator(context);
	if (!z.uuid().safeParse(params.draftId).success) throw refusal("release_not_found");
	const form = parseForm(Decision, await request.formData());
	if (!form.ok) return data({ values: form.values, problems: form.problems, refused: null }, { status: 400 });

	const decided = await network.transaction(async (trx): Promise<Decided> => {
		const draft = await findDraft(trx, network.viewer, params.draftId);
		return draft
			? decideRelease(trx, network.viewer, draft, form.value, new Date())
			: ({ refused: "not_found" } as const);
	});
	if ("problem" in decided)
		return data({ values: form.values, problems: [decided.problem], refused: null }, { status: 400 });
	if ("refused" in decided) {
		if (decided.refused === "not_found") throw refusal("release_not_found");
		return data({ values: form.values, problems: [], refused: decided.refused }, { status: 409 });
	}
	const { done, ...values } = decided;
	context.get(sessionContext).flash("toast", { key: `release:toast.${done}`, values });
	return redirect(href("/network/releases/:draftId", params), 303);
}

export const shouldRevalidate = lookAgain;

export default function ReleaseReview({ loaderData, actionData }: Route.ComponentProps) {
	const { t, i18n } = useTranslation("release");
	const format = useFormat();
	const { view, own, withdrawn } = loaderData;
	const { draft } = view;
	const report = draftReportProps(view);
	const name = { title: wordsIn(draft.title, i18n.language), season: draft.season };
	const state = withdrawn ? "withdrawn" : draft.status;
	const moment = draft.publishAt ? format.moment(draft.publishAt, draft.timeZone) : "";
	return (
		<Page
			title={t("review.title", name)}
			lead={t("review.lead", { name: draft.draftedBy.displayName, moment: format.moment(draft.draftedAt) })}
		>
			<ErrorSummary problems={actionData?.problems} labels={decisionLabels(t)} />
			{actionData?.refused && <Notice tone="attention">{t(`refused.${actionData.refused}`)}</Notice>}
			<Notice tone={state === "audited" ? "attention" : "info"} title={t(`review.state.${state}`)}>
				{t(`review.explain.${state}`, { moment })}
				{withdrawn && <p className="mt-2">{wordsIn(withdrawn, i18n.language)}</p>}
				{state === "approved" && (
					<p className="mt-3">
						<ButtonLink to={href("/map")} kind="secondary">
							{t("review.toMap")}
						</ButtonLink>
					</p>
				)}
			</Notice>
			{draft.revisionReason && (
				<Notice tone="info" title={t("revision.is")}>
					{wordsIn(draft.revisionReason, i18n.language)}
				</Notice>
			)}
			{report && <DraftReport {...report} />}
			{draft.status === "audited" &&
				(own ? (
					<Notice tone="attention">{t("refused.own_draft")}</Notice>
				) : (
					<DecisionForms {...actionData} tomorrow={loaderData.tomorrow} />
				))}
			{draft.status === "scheduled" && <UnscheduleForm />}
			{state === "approved" && <WithdrawForm {...actionData} />}
		</Page>
	);
}

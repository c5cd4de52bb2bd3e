import { useTranslation } from "react-i18next";
import { data, Form, href, redirect } from "react-router";
import type { Route } from "./+types/settings";
import { requireCoordinator } from "#app/auth/guard.server.ts";
import { sessionContext } from "#app/auth/session.server.ts";
import { Button } from "#app/components/button.tsx";
import { ErrorSummary } from "#app/components/error-summary.tsx";
import { NotDone } from "#app/components/notice.tsx";
import { Page } from "#app/components/page.tsx";
import { Section } from "#app/components/section.tsx";
import { readNetworkRules } from "#app/jobs/network-rules.server.ts";
import { networkRules } from "#app/jobs/network-rules.ts";
import { lookAgain } from "#app/lib/look-again.ts";
import { parseForm } from "#app/lib/parse-form.ts";
import { listDrafts, waitingStatuses } from "#app/release/drafts.server.ts";
import { listRulesRows, saveRules } from "#app/release/network-rules.server.ts";
import { changesOf, movesBetween, type RuleMove } from "#app/release/rules-change.ts";
import { formOf, ruleNames, RulesForm } from "#app/release/rules.schema.ts";
import { DraftsUnderWay } from "./parts/settings/drafts-under-way.tsx";
import { Loosening } from "./parts/settings/loosening.tsx";
import { RuleField } from "./parts/settings/rule-field.tsx";
import { RulesHistory } from "./parts/settings/rules-history.tsx";

/** The form's id, since the button that agrees to a looser rule stands above it. */
const formId = "rules";

export async function loader({ context }: Route.LoaderArgs) {
	const network = requireCoordinator(context);
	return network.transaction(async (trx) => {
		const standing = await readNetworkRules(trx);
		const rows = await listRulesRows(trx, network.viewer);
		const drafts = await listDrafts(trx, network.viewer);
		return {
			standing: formOf(standing),
			basedOn: rows[0]?.networkRulesId ?? 0,
			changes: changesOf(rows, networkRules),
			underWay: drafts
				.filter(({ status }) => waitingStatuses.some((waiting) => waiting === status))
				.map(({ releaseDraftId, status, season, title, rules }) => ({
					releaseDraftId,
					status,
					season,
					title,
					otherRules: movesBetween(rules, standing).length > 0,
				})),
		};
	});
}

export async function action({ context, request }: Route.ActionArgs) {
	const network = requireCoordinator(context);
	const form = parseForm(RulesForm, await request.formData());
	const nothing = { problems: [], refused: null, loosening: [] as RuleMove[], agreement: "" };
	if (!form.ok) return data({ ...nothing, values: form.values, problems: form.problems }, { status: 400 });

	const saved = await network.transaction((trx) => saveRules(trx, network.viewer, form.value, networkRules));
	const { outcome } = saved;
	if (outcome === "loosens") return data({ ...nothing, ...saved, values: form.values }, { status: 400 });
	if (outcome === "changed_meanwhile")
		return data({ ...nothing, values: form.values, refused: outcome }, { status: 409 });
	context.get(sessionContext).flash("toast", { key: `network:settings.toast.${outcome}` });
	return redirect(href("/network/settings"), 303);
}

export const shouldRevalidate = lookAgain;

export default function Settings({ loaderData, actionData }: Route.ComponentProps) {
	const { t } = useTranslation("network");
	const { standing, basedOn, changes, underWay } = loaderData;
	const field = (name: (typeof ruleNames)[number]) => (
		<RuleField name={name} stands={standing[name]} changes={changes} sent={actionData} />
	);
	return (
		<Page title={t("settings.title")} lead={t("settings.lead")}>
			<ErrorSummary
				problems={actionData?.problems}
				labels={Object.fromEntries(ruleNames.map((name) => [name, t(`settings.rule.${name}.label`)]))}
			/>
			{actionData?.refused && (
				<NotDone answer={actionData} tone="attention" title={t("settings.meanwhileTitle")}>
					{t("settings.meanwhileBody")}
				</NotDone>
			)}
			{actionData && actionData.loosening.length > 0 && (
				<Loosening {...actionData} formId={formId} answer={actionData} />
			)}
			<DraftsUnderWay drafts={underWay} />
			<Form key={basedOn} id={formId} method="post" noValidate className="max-w-2xl">
				<input type="hidden" name="basedOn" value={basedOn} />
				<Section title={t("settings.protection")}>
					{field("minimumOwners")}
					{field("dominancePercent")}
					{field("largestOwners")}
					{field("largestPercent")}
					{field("publicFactor")}
				</Section>
				<Section title={t("settings.steadiness")}>
					{field("steadyPercent")}
					{field("carePercent")}
					{field("steadyDays")}
					{field("careDays")}
				</Section>
				<Button>{t("settings.save")}</Button>
			</Form>
			<Section title={t("settings.history")}>
				<RulesHistory changes={changes} />
			</Section>
		</Page>
	);
}

import { useTranslation } from "react-i18next";
import { data, Form, href, redirect } from "react-router";
import type { Route } from "./+types/settings";
import { logEvent } from "#app/auth/event-log.server.ts";
import { requireCoordinator } from "#app/auth/guard.server.ts";
import { sessionContext } from "#app/auth/session.server.ts";
import { Confirm } from "#app/components/confirm.tsx";
import { DataTable } from "#app/components/data-table.tsx";
import { EmptyState } from "#app/components/empty-state.tsx";
import { ErrorSummary } from "#app/components/error-summary.tsx";
import { Page } from "#app/components/page.tsx";
import { Section } from "#app/components/section.tsx";
import { TextField } from "#app/components/text-field.tsx";
import { useFormat } from "#app/i18n/use-format.ts";
import { readNetworkRules } from "#app/jobs/network-rules.server.ts";
import { parseForm } from "#app/lib/parse-form.ts";
import type { ReleaseRules } from "#app/release/draft.ts";
import { listRulesChanges, saveRules } from "#app/release/network-rules.server.ts";
import { formOf, RulesForm, rulesOf } from "#app/release/rules.schema.ts";

export async function loader({ context }: Route.LoaderArgs) {
	const network = requireCoordinator(context);
	return network.transaction(async (trx) => ({
		standing: formOf(await readNetworkRules(trx)),
		changes: await listRulesChanges(trx, network.viewer),
	}));
}

export async function action({ context, request }: Route.ActionArgs) {
	const network = requireCoordinator(context);
	const form = parseForm(RulesForm, await request.formData());
	if (!form.ok) return data({ values: form.values, problems: form.problems }, { status: 400 });
	const rules = rulesOf(form.value);
	await network.transaction(async (trx) => {
		const id = await saveRules(trx, network.viewer, rules);
		const subject = { subjectKind: "settings", subjectId: String(id), detail: {} };
		await logEvent(trx, { personId: network.viewer.personId, action: "settings.changed", ...subject });
	});
	context.get(sessionContext).flash("toast", { key: "network:settings.toast" });
	return redirect(href("/network/settings"), 303);
}

const names = [
	...(["minimumOwners", "dominancePercent", "largestOwners", "largestPercent", "publicFactor"] as const),
	...(["steadyPercent", "carePercent", "steadyDays", "careDays"] as const),
];

export default function Settings({ loaderData, actionData }: Route.ComponentProps) {
	const { t } = useTranslation("network");
	const field = useRuleField(loaderData.standing, actionData);
	return (
		<Page title={t("settings.title")} lead={t("settings.lead")}>
			<ErrorSummary
				problems={actionData?.problems}
				labels={Object.fromEntries(names.map((name) => [name, t(`settings.${name}`)]))}
			/>
			<Form key={JSON.stringify(loaderData.standing)} method="post" noValidate className="max-w-2xl">
				<Section title={t("settings.protection")}>
					<TextField {...field("minimumOwners")} help={t("settings.minimumOwnersHelp")} />
					<TextField {...field("dominancePercent")} help={t("settings.dominancePercentHelp")} suffix="%" />
					<TextField {...field("largestOwners")} help={t("settings.largestHelp")} optional />
					<TextField {...field("largestPercent")} suffix="%" optional />
					<TextField {...field("publicFactor")} help={t("settings.publicFactorHelp")} optional />
				</Section>
				<Section title={t("settings.steadiness")}>
					<TextField {...field("steadyPercent")} help={t("settings.percentHelp")} suffix="%" />
					<TextField {...field("carePercent")} suffix="%" />
					<TextField {...field("steadyDays")} help={t("settings.daysHelp")} />
					<TextField {...field("careDays")} />
				</Section>
				<Confirm
					trigger={t("settings.save")}
					title={t("settings.confirmTitle")}
					body={t("settings.confirmBody")}
					confirmLabel={t("settings.save")}
				/>
			</Form>
			<Section title={t("settings.history")}>
				<Changes changes={loaderData.changes} />
			</Section>
		</Page>
	);
}

type Standing = Route.ComponentProps["loaderData"]["standing"];

function useRuleField(standing: Standing, sent: Route.ComponentProps["actionData"]) {
	const { t } = useTranslation("network");
	const format = useFormat();
	return (name: keyof Standing) => {
		const typed = sent?.values[name];
		const stands = standing[name];
		return {
			name,
			label: t(`settings.${name}`),
			inputMode: "decimal" as const,
			size: "short" as const,
			defaultValue: typeof typed === "string" ? typed : stands === null ? "" : format.number(stands, digitsOf(stands)),
			problem: sent?.problems.find((problem) => problem.field === name),
		};
	};
}

function Changes({ changes }: Pick<Route.ComponentProps["loaderData"], "changes">) {
	const { t } = useTranslation("network");
	const format = useFormat();
	const told = useToldRules();
	return (
		<DataTable
			caption={t("settings.history")}
			captionHidden
			rows={changes}
			rowKey={(change) => String(change.networkRulesId)}
			columns={[
				{ key: "when", header: t("settings.when"), cell: (change) => format.moment(change.setAt) },
				{ key: "who", header: t("settings.who"), cell: (change) => change.setBy },
				{ key: "what", header: t("settings.what"), cell: (change) => told(change.rules) },
			]}
			empty={<EmptyState title={t("settings.history")}>{t("settings.first")}</EmptyState>}
		/>
	);
}

/** As many decimals as somebody typed, two at most. */
const digitsOf = (value: number) =>
	[0, 1].find((digits) => Math.abs(value - Number(value.toFixed(digits))) < 1e-9) ?? 2;

/** A set of rules in one line. */
function useToldRules() {
	const { t } = useTranslation("network");
	const format = useFormat();
	const quantity = (value: number, unit: "percent" | "days") => format.quantity(value, unit, digitsOf(value));
	return ({ minimumOwners, dominancePercent, largest, publicFactor, ...cutOffs }: ReleaseRules) =>
		[
			t("settings.told", {
				owners: format.number(minimumOwners),
				percent: quantity(dominancePercent, "percent"),
				steady: quantity(cutOffs.steadyCv * 100, "percent"),
				care: quantity(cutOffs.careCv * 100, "percent"),
				steadyDays: quantity(cutOffs.steadyDays, "days"),
				careDays: quantity(cutOffs.careDays, "days"),
			}),
			...(largest
				? [
						t("settings.toldLargest", {
							owners: format.number(largest.owners),
							percent: quantity(largest.percent, "percent"),
						}),
					]
				: []),
			...(publicFactor
				? [t("settings.toldFactor", { factor: format.number(publicFactor, digitsOf(publicFactor)) })]
				: []),
		].join("; ");
}

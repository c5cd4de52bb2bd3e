import { useTranslation } from "react-i18next";
import { data, Form, href, redirect } from "react-router";
import type { Route } from "./+types/settings";
import { requireOrchard } from "#app/auth/guard.server.ts";
import { sessionContext } from "#app/auth/session.server.ts";
import { listOwnConsents } from "#app/collect/own-consents.server.ts";
import { markReachable } from "#app/collect/reach.server.ts";
import { unitsFor } from "#app/collect/units.ts";
import { Button } from "#app/components/button.tsx";
import { CheckField } from "#app/components/check-field.tsx";
import { ChoiceField } from "#app/components/choice-field.tsx";
import { ErrorSummary } from "#app/components/error-summary.tsx";
import { Notice } from "#app/components/notice.tsx";
import { Page } from "#app/components/page.tsx";
import { Pledge } from "#app/components/pledge.tsx";
import { Section } from "#app/components/section.tsx";
import { TextField } from "#app/components/text-field.tsx";
import { findOwnSettings, saveOwnSettings } from "#app/directory/own-settings.server.ts";
import { languages, wordsIn } from "#app/i18n/language.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import { parseForm } from "#app/lib/parse-form.ts";
import { pledgeVersion } from "#app/lib/pledge.ts";
import { refusal } from "#app/lib/refusal.ts";
import { BackToOrchard } from "./parts/back-to-orchard.tsx";
import { SettingsForm } from "./parts/settings-form.ts";

export async function loader({ context, params }: Route.LoaderArgs) {
	const grower = requireOrchard(context);
	const { operationId } = params;
	const found = await grower.transaction(async (trx) => {
		const own = await findOwnSettings(trx, grower.viewer, operationId);
		return own && { ...own, consents: await listOwnConsents(trx, grower.viewer, operationId) };
	});
	if (!found) throw refusal("orchard_not_found");
	return found;
}

export async function action({ context, params, request }: Route.ActionArgs) {
	const grower = requireOrchard(context);
	const form = parseForm(SettingsForm, await request.formData());
	if (!form.ok) return data({ values: form.values, problems: form.problems }, { status: 400 });
	const outcome = await grower.transaction(async (trx) => {
		const saved = await saveOwnSettings(trx, grower.viewer, params.operationId, form.value);
		if (saved === "address_mended") await markReachable(trx, params.operationId);
		return saved;
	});
	if (outcome === "not_found") throw refusal("orchard_not_found");
	context.get(sessionContext).flash("toast", { key: "orchard:settings.saved" });
	return redirect(href("/orchard/:operationId/settings", params), 303);
}

const fields = ["contactName", "email", "phone", "language", "massUnit", "mailWanted"] as const;

export default function Settings({ loaderData, actionData }: Route.ComponentProps) {
	const { t } = useTranslation("orchard");
	const { operation, settings, consents, mailReturned } = loaderData;
	const { values: sent, problems } = actionData ?? {};
	const field = (name: (typeof fields)[number]) => {
		const standing = settings[name];
		const typed = sent?.[name];
		return {
			name,
			defaultValue: sent ? (typeof typed === "string" ? typed : "") : typeof standing === "string" ? standing : "",
			problem: problems?.find((problem) => problem.field === name),
		};
	};
	const text = (name: "contactName" | "email" | "phone") => ({ ...field(name), label: t(`settings.${name}`) });
	const { defaultValue: _, ...mailWanted } = field("mailWanted");
	return (
		<Page title={t("settings.title")} lead={t("settings.lead", { operation: operation.name })}>
			<BackToOrchard />
			<ErrorSummary
				problems={problems}
				labels={Object.fromEntries(fields.map((name) => [name, t(`settings.${name}`)]))}
			/>
			{mailReturned && <Notice tone="attention">{t("settings.help.returned")}</Notice>}
			<Form method="post" noValidate>
				<TextField {...text("contactName")} autoComplete="name" size="full" maxLength={200} />
				<TextField
					{...text("email")}
					type="email"
					autoComplete="email"
					help={t("settings.help.email")}
					size="full"
					maxLength={254}
					optional
				/>
				<TextField {...text("phone")} type="tel" autoComplete="tel" maxLength={40} optional />
				<CheckField
					{...mailWanted}
					label={t("settings.mailWanted")}
					help={t("settings.help.mailWanted")}
					defaultChecked={sent ? sent.mailWanted === "on" : settings.mailWanted}
				/>
				<ChoiceField
					{...field("language")}
					kind="radio"
					legend={t("settings.language")}
					help={t("settings.help.language")}
					options={languages.map((value) => ({ value, label: t(`common:language.${value}`) }))}
				/>
				<ChoiceField
					{...field("massUnit")}
					kind="select"
					legend={t("settings.massUnit")}
					help={t("settings.help.massUnit")}
					options={unitsFor("mass", 1).map((value) => ({ value, label: t(`grower:screen.unit.${value}`) }))}
				/>
				<Button>{t("settings.save")}</Button>
			</Form>
			<Consents consents={consents} />
		</Page>
	);
}

/** What was agreed to, when and for which survey, with the words as they stand now. */
function Consents({ consents }: Pick<Route.ComponentProps["loaderData"], "consents">) {
	const { t, i18n } = useTranslation("orchard");
	const format = useFormat();
	return (
		<Section title={t("settings.consents")}>
			{consents.length === 0 ? (
				<p>{t("settings.noConsent")}</p>
			) : (
				<ul className="list-disc space-y-1 pl-6">
					{consents.map(({ surveyId, title, season, pledgeVersion: version, pledgedAt, timeZone }) => (
						<li key={surveyId}>
							{t("settings.consent", {
								survey: t("home.survey", { title: wordsIn(title, i18n.language), season }),
								version,
								day: format.dayOf(pledgedAt, timeZone),
							})}
						</li>
					))}
				</ul>
			)}
			<Section title={t("settings.pledge", { version: pledgeVersion })} level={3}>
				<Pledge />
			</Section>
		</Section>
	);
}

import { useTranslation } from "react-i18next";
import { data, Form, href, redirect } from "react-router";
import type { Route } from "./+types/keys";
import {
	ApiKeyForm,
	keyDays,
	keyScopes,
	listApiKeys,
	makeApiKey,
	RevokeForm,
	revokeApiKey,
} from "#app/auth/api-keys.server.ts";
import { apiLimits } from "#app/auth/api-limits.server.ts";
import { requirePerson, requireResearcher } from "#app/auth/guard.server.ts";
import { findOwnTerm } from "#app/auth/research-term.server.ts";
import { sessionContext } from "#app/auth/session.server.ts";
import { visitorContext } from "#app/auth/visitor.server.ts";
import { Button, ButtonLink } from "#app/components/button.tsx";
import { ChoiceField } from "#app/components/choice-field.tsx";
import { CopyButton } from "#app/components/copy-button.tsx";
import { ErrorSummary } from "#app/components/error-summary.tsx";
import { Notice } from "#app/components/notice.tsx";
import { Page } from "#app/components/page.tsx";
import { Section } from "#app/components/section.tsx";
import { TextField } from "#app/components/text-field.tsx";
import { useFormat } from "#app/i18n/use-format.ts";
import { type FormValues, parseForm } from "#app/lib/parse-form.ts";
import { refusal } from "#app/lib/refusal.ts";
import { KeyTable } from "./parts/key-table.tsx";

export async function loader({ context }: Route.LoaderArgs) {
	const { viewer } = requirePerson(context);
	const approved = context.get(visitorContext).grants.researcher;
	return {
		approved,
		endedOn: approved ? null : ((await findOwnTerm(viewer))?.lastDay ?? null),
		now: new Date(),
		keys: approved ? await listApiKeys(requireResearcher(context)) : [],
		limits: apiLimits,
		scopes: keyScopes,
		days: keyDays,
	};
}

export async function action({ context, request }: Route.ActionArgs) {
	const researcher = requireResearcher(context);
	const sent = await request.formData();
	if (sent.has("apiKeyId")) {
		const form = parseForm(RevokeForm, sent);
		if (!form.ok || (await revokeApiKey(researcher, form.value.apiKeyId)) === "not_found")
			throw refusal("page_not_found");
		context.get(sessionContext).flash("toast", { key: "dataroom:keys.toast.revoked" });
		return redirect(href("/dataroom/keys"), 303);
	}

	const form = parseForm(ApiKeyForm, sent);
	if (!form.ok) return data({ values: form.values, problems: form.problems, key: null }, { status: 400 });
	const outcome = await makeApiKey(researcher, form.value);
	if (outcome === "too_many_keys") {
		const problems = [{ field: "label", code: "too_many_keys" }];
		return data({ values: form.values, problems, key: null }, { status: 400 });
	}
	// Answered with the page itself and no redirect: this is the only time that the key is told.
	return data({ values: {}, problems: [], key: outcome.key }, { status: 201 });
}

export default function Keys({ loaderData, actionData }: Route.ComponentProps) {
	const { t } = useTranslation("dataroom");
	const format = useFormat();
	const { approved, endedOn, keys, limits, now } = loaderData;
	const lead = t("keys.lead", { open: format.number(limits.open), key: format.number(limits.key) });
	return (
		<Page title={t("keys.title")} lead={lead}>
			{!approved && <NoKeys endedOn={endedOn} />}
			{actionData?.key && <MadeKey value={actionData.key} />}
			{approved && (
				<>
					<KeyTable keys={keys} now={now} />
					<Section title={t("keys.makeTitle")}>
						<MakeForm key={actionData?.key ?? ""} loaderData={loaderData} actionData={actionData} />
					</Section>
				</>
			)}
		</Page>
	);
}

/** For who is not approved, or is not any more: keys that were made before rest meanwhile. */
function NoKeys({ endedOn }: { endedOn: string | null }) {
	const { t } = useTranslation("dataroom");
	const format = useFormat();
	return endedOn ? (
		<Notice tone="attention" title={t("home.endedTitle", { day: format.day(endedOn) })}>
			<p className="mb-3">{t("keys.restBody")}</p>
			<ButtonLink to={href("/dataroom/access")}>{t("home.askAgain")}</ButtonLink>
		</Notice>
	) : (
		<Notice tone="info" title={t("keys.notApprovedTitle")}>
			<p className="mb-3">{t("keys.notApprovedBody")}</p>
			<ButtonLink to={href("/dataroom/access")}>{t("home.ask")}</ButtonLink>
		</Notice>
	);
}

function MadeKey({ value }: { value: string }) {
	const { t } = useTranslation("dataroom");
	return (
		<Notice tone="attention" title={t("keys.madeTitle")}>
			<p>{t("keys.madeBody")}</p>
			<p className="mt-3 flex flex-wrap items-center gap-3">
				<code className="border border-line bg-paper px-3 py-2 text-lg wrap-anywhere">{value}</code>
				<CopyButton text={value} label={t("keys.copy")} />
			</p>
		</Notice>
	);
}

function MakeForm({ loaderData, actionData }: Pick<Route.ComponentProps, "loaderData" | "actionData">) {
	const { t } = useTranslation("dataroom");
	const problemOf = (field: string) => actionData?.problems.find((problem) => problem.field === field);
	const values: FormValues = actionData?.values ?? {};
	const typed = (field: string) => values[field] as string | string[] | undefined;
	return (
		<Form method="post" noValidate>
			<ErrorSummary
				problems={actionData?.problems}
				labels={{ label: t("keys.label"), scopes: t("keys.scopes"), days: t("keys.days") }}
			/>
			<TextField
				name="label"
				label={t("keys.label")}
				help={t("keys.labelHelp")}
				maxLength={80}
				defaultValue={(typed("label") as string | undefined) ?? ""}
				problem={problemOf("label")}
			/>
			<ChoiceField
				kind="checkbox"
				name="scopes"
				legend={t("keys.scopes")}
				options={loaderData.scopes.map((scope) => ({ value: scope, label: t(`keys.scope.${scope}`) }))}
				defaultValue={typed("scopes") ?? [...loaderData.scopes]}
				problem={problemOf("scopes")}
			/>
			<ChoiceField
				kind="select"
				name="days"
				legend={t("keys.days")}
				options={loaderData.days.map((days) => ({ value: days, label: t(`keys.dayChoice.${days}`) }))}
				defaultValue={typed("days") ?? "90"}
				problem={problemOf("days")}
			/>
			<Button>{t("keys.make")}</Button>
		</Form>
	);
}

import { useTranslation } from "react-i18next";
import { data, Form, href, redirect } from "react-router";
import type { Route } from "./+types/access";
import { requirePerson } from "#app/auth/guard.server.ts";
import { AccessRequestForm, findOwnRequest, requestAccess } from "#app/auth/research-access.server.ts";
import { findOwnTerm } from "#app/auth/research-term.server.ts";
import { sessionContext } from "#app/auth/session.server.ts";
import { Button, ButtonLink } from "#app/components/button.tsx";
import { CheckField } from "#app/components/check-field.tsx";
import { ErrorSummary } from "#app/components/error-summary.tsx";
import { Notice } from "#app/components/notice.tsx";
import { Page } from "#app/components/page.tsx";
import { Section } from "#app/components/section.tsx";
import { TextField } from "#app/components/text-field.tsx";
import { useFormat } from "#app/i18n/use-format.ts";
import { type FormValues, parseForm } from "#app/lib/parse-form.ts";

export async function loader({ context }: Route.LoaderArgs) {
	const { viewer } = requirePerson(context);
	const [term, request] = await Promise.all([findOwnTerm(viewer), findOwnRequest(viewer)]);
	return {
		term,
		waiting: request !== null && request.decision === null,
		declined: request?.decision === "declined" ? request.decisionReason : null,
		// What was told last time, so that it is looked over and not typed anew. The agreement is accepted each time.
		earlier: request && { affiliation: request.affiliation, purpose: request.purpose },
	};
}

export async function action({ context, request }: Route.ActionArgs) {
	const { viewer } = requirePerson(context);
	const form = parseForm(AccessRequestForm, await request.formData());
	if (!form.ok) return data({ values: form.values, problems: form.problems }, { status: 400 });

	const outcome = await requestAccess(viewer, form.value);
	context.get(sessionContext).flash("toast", { key: `dataroom:access.toast.${outcome}` });
	return redirect(href("/dataroom"), 303);
}

export default function AskAccess({ loaderData, actionData }: Route.ComponentProps) {
	const { t } = useTranslation("dataroom");
	const format = useFormat();
	const { term, waiting, declined, earlier } = loaderData;
	const day = (iso: string | null) => (iso ? format.day(iso) : "");
	const lasting = term !== null && !term.renewable;
	if (lasting || waiting)
		return (
			<Page title={t(lasting ? "access.titleHave" : "access.title")} lead={t("access.lead")} width="narrow">
				<Notice tone="info" title={t(waiting ? "home.waitingTitle" : "access.haveTitle")}>
					{lasting && term.lastDay && (
						<p className="mb-3">{t("access.haveBody", { day: day(term.lastDay), from: day(term.renewableFrom) })}</p>
					)}
					<ButtonLink to={href("/dataroom")} kind="secondary">
						{t("access.toFiles")}
					</ButtonLink>
				</Notice>
			</Page>
		);
	const lead = term
		? `${t(term.holds ? "access.leadEnding" : "access.leadEnded", { day: day(term.lastDay) })} ${t(earlier ? "access.lookOver" : "access.say")}`
		: t("access.lead");
	return (
		<Page title={t(term ? "access.titleAgain" : "access.title")} lead={lead} width="narrow">
			{declined && (
				<Notice tone="attention" title={t("home.declinedTitle")}>
					{declined}
				</Notice>
			)}
			<RequestForm earlier={earlier} actionData={actionData} />
		</Page>
	);
}

type RequestFormProps = Pick<Route.ComponentProps, "actionData"> & Pick<Route.ComponentProps["loaderData"], "earlier">;

function RequestForm({ earlier, actionData }: RequestFormProps) {
	const { t } = useTranslation("dataroom");
	const problemOf = (field: string) => actionData?.problems.find((problem) => problem.field === field);
	const values: FormValues = actionData?.values ?? earlier ?? {};
	const typed = (field: string) => {
		const value = values[field];
		return typeof value === "string" ? value : "";
	};
	return (
		<Form method="post" noValidate className="grid gap-6">
			<ErrorSummary
				problems={actionData?.problems}
				labels={{ affiliation: t("access.affiliation"), purpose: t("access.purpose"), agreed: t("access.agree") }}
			/>
			<TextField
				name="affiliation"
				label={t("access.affiliation")}
				help={t("access.affiliationHelp")}
				autoComplete="organization"
				maxLength={200}
				defaultValue={typed("affiliation")}
				problem={problemOf("affiliation")}
			/>
			<TextField
				name="purpose"
				label={t("access.purpose")}
				help={t("access.purposeHelp")}
				multiline
				rows={5}
				maxLength={4000}
				defaultValue={typed("purpose")}
				problem={problemOf("purpose")}
			/>
			<Section title={t("access.agreementTitle")}>
				<ul className="list-disc pl-6">
					{(["noIdentify", "noLink", "noPass", "cite", "tell"] as const).map((term) => (
						<li key={term} className="mb-2">
							{t(`access.agreement.${term}`)}
						</li>
					))}
				</ul>
			</Section>
			<CheckField
				name="agreed"
				label={t("access.agree")}
				defaultChecked={typed("agreed") === "on"}
				problem={problemOf("agreed")}
			/>
			<div>
				<Button>{t("access.send")}</Button>
			</div>
		</Form>
	);
}

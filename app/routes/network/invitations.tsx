import { useTranslation } from "react-i18next";
import { data, Form, href, Link, redirect } from "react-router";
import type { Route } from "./+types/invitations";
import { listStates } from "#app/auth/grants.server.ts";
import { requireCoordinator } from "#app/auth/guard.server.ts";
import {
	invitationDays,
	InvitationForm,
	invite,
	inviteAgain,
	invitedRoles,
	withdrawInvitation,
} from "#app/auth/invitations.server.ts";
import { sessionContext } from "#app/auth/session.server.ts";
import { Button } from "#app/components/button.tsx";
import { ChoiceField } from "#app/components/choice-field.tsx";
import { ErrorSummary } from "#app/components/error-summary.tsx";
import { NotDone } from "#app/components/notice.tsx";
import { Page } from "#app/components/page.tsx";
import { TextField } from "#app/components/text-field.tsx";
import { languages } from "#app/i18n/language.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import { queueInvitation } from "#app/jobs/mail-invitation.server.ts";
import { lookAgain } from "#app/lib/look-again.ts";
import { type FormValues, parseForm, type Problem } from "#app/lib/parse-form.ts";

export async function loader({ context }: Route.LoaderArgs) {
	const network = requireCoordinator(context);
	return network.transaction(async (trx) => ({ states: await listStates(trx), roles: invitedRoles, invitationDays }));
}

export async function action({ context, request }: Route.ActionArgs) {
	const network = requireCoordinator(context);
	const form = parseForm(InvitationForm, await request.formData());
	if (!form.ok) return data({ values: form.values, problems: form.problems, refused: null }, { status: 400 });

	const { value } = form;
	const outcome = await network.transaction(async (trx) => {
		if (value.step === "withdraw") return withdrawInvitation(trx, network.viewer, value.invitationId);
		const sent =
			value.step === "invite"
				? await invite(trx, network.viewer, value)
				: await inviteAgain(trx, network.viewer, value.invitationId);
		if ("refused" in sent) return sent.refused;
		await queueInvitation(trx, sent.invitationId);
		return value.step === "invite" ? "invited" : "invited_again";
	});
	const values: FormValues = form.values;
	const problem = problemOf(outcome);
	if (problem && value.step === "invite") return data({ values, problems: [problem], refused: null }, { status: 400 });
	if (outcome !== "invited" && outcome !== "invited_again" && outcome !== "withdrawn")
		return data({ values, problems: [], refused: outcome }, { status: 409 });
	context.get(sessionContext).flash("toast", { key: `network:invitations.toast.${outcome}` });
	return redirect(href("/network"), 303);
}

/** What can be mended in a field is said there. */
function problemOf(outcome: string): Problem | undefined {
	if (outcome === "states_needed") return { field: "states", code: "empty" };
	if (outcome === "end_past" || outcome === "end_far") return { field: "endsOn", code: outcome };
	return outcome === "already_invited" ? { field: "email", code: outcome } : undefined;
}

export const shouldRevalidate = lookAgain;

/** Invites somebody by mail to a role that begins when they sign in with that address. */
export default function Invitations({ loaderData, actionData }: Route.ComponentProps) {
	const { t } = useTranslation("network");
	const format = useFormat();
	const { states, roles, invitationDays: days } = loaderData;
	const values: FormValues = actionData?.values ?? {};
	const typed = (name: string, otherwise = "") => {
		const value = values[name];
		return typeof value === "string" ? value : otherwise;
	};
	const problem = (name: string) => actionData?.problems.find(({ field }) => field === name);
	const labels = Object.fromEntries(
		(["email", "role", "states", "language", "endsOn"] as const).map((name) => [name, t(`invitations.${name}`)]),
	);
	return (
		<Page
			title={t("invitations.title")}
			lead={t("invitations.lead", { days: format.quantity(days, "days") })}
			width="narrow"
		>
			<ErrorSummary problems={actionData?.problems} labels={labels} />
			{actionData?.refused && (
				<NotDone answer={actionData} tone="attention">
					{t(`invitations.refused.${actionData.refused}`)}
				</NotDone>
			)}
			<Form method="post" noValidate>
				<TextField
					name="email"
					type="email"
					autoComplete="off"
					label={t("invitations.email")}
					help={t("invitations.emailHelp")}
					maxLength={254}
					size="full"
					defaultValue={typed("email")}
					problem={problem("email")}
				/>
				<ChoiceField
					kind="radio"
					name="role"
					legend={t("invitations.role")}
					defaultValue={typed("role", "associate")}
					problem={problem("role")}
					options={roles.map((role) => ({
						value: role,
						label: t(`common:role.${role}`),
						help: t(`invitations.roleHelp.${role}`),
					}))}
				/>
				<ChoiceField
					kind="checkbox"
					name="states"
					legend={t("invitations.states")}
					help={t("people.stateHelp")}
					optional
					defaultValue={listOf(values.states)}
					problem={problem("states")}
					options={states.map((state) => ({ value: state, label: t(`common:state.${state}`) }))}
				/>
				<ChoiceField
					kind="radio"
					name="language"
					legend={t("invitations.language")}
					defaultValue={typed("language", "en")}
					problem={problem("language")}
					options={languages.map((language) => ({ value: language, label: t(`common:language.${language}`) }))}
				/>
				<TextField
					name="endsOn"
					type="date"
					label={t("invitations.endsOn")}
					help={t("people.endsOnHelp")}
					optional
					defaultValue={typed("endsOn")}
					problem={problem("endsOn")}
				/>
				<div className="flex flex-wrap items-center gap-4">
					<Button name="step" value="invite">
						{t("invitations.send")}
					</Button>
					<Link to={href("/network")}>{t("people.end.back")}</Link>
				</div>
			</Form>
		</Page>
	);
}

/** One ticked box comes as itself, several as a list. */
function listOf(value: unknown): string[] {
	return (Array.isArray(value) ? value : [value]).filter((one) => typeof one === "string");
}

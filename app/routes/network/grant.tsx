import { useTranslation } from "react-i18next";
import { data, Form, href, Link, redirect } from "react-router";
import { z } from "zod";
import type { Route } from "./+types/grant";
import { findGrant, GrantEndForm, setGrantEnd } from "#app/auth/grant-end.server.ts";
import { requireCoordinator } from "#app/auth/guard.server.ts";
import { sessionContext } from "#app/auth/session.server.ts";
import { Button } from "#app/components/button.tsx";
import { DescriptionList } from "#app/components/description-list.tsx";
import { ErrorSummary } from "#app/components/error-summary.tsx";
import { NotDone } from "#app/components/notice.tsx";
import { Page } from "#app/components/page.tsx";
import { Section } from "#app/components/section.tsx";
import { TextField } from "#app/components/text-field.tsx";
import { useFormat } from "#app/i18n/use-format.ts";
import { lookAgain } from "#app/lib/look-again.ts";
import { parseForm } from "#app/lib/parse-form.ts";
import { refusal } from "#app/lib/refusal.ts";
import { useGrantWords } from "./parts/people/grant-words.ts";

export async function loader({ context, params }: Route.LoaderArgs) {
	const network = requireCoordinator(context);
	if (!z.uuid().safeParse(params.roleGrantId).success) throw refusal("grant_not_found");
	const grant = await network.transaction((trx) => findGrant(trx, params.roleGrantId));
	if (!grant?.holds) throw refusal("grant_not_found");
	return { grant };
}

export async function action({ context, params, request }: Route.ActionArgs) {
	const network = requireCoordinator(context);
	if (!z.uuid().safeParse(params.roleGrantId).success) throw refusal("grant_not_found");
	const form = parseForm(GrantEndForm, await request.formData());
	if (!form.ok) return data({ values: form.values, problems: form.problems, refused: null }, { status: 400 });

	const endsOn = form.value.endsOn ?? null;
	const outcome = await network.transaction((trx) => setGrantEnd(trx, network.viewer, params.roleGrantId, endsOn));
	if (outcome === "not_found") throw refusal("grant_not_found");
	if (outcome === "last_coordinator")
		return data({ values: form.values, problems: [], refused: outcome }, { status: 409 });
	if (outcome !== "end_set")
		return data(
			{ values: form.values, problems: [{ field: "endsOn", code: outcome }], refused: null },
			{ status: 400 },
		);
	context.get(sessionContext).flash("toast", { key: `network:people.toast.${endsOn ? "end_set" : "end_taken_away"}` });
	return redirect(href("/network"), 303);
}

export const shouldRevalidate = lookAgain;

/** One grant, with the day on which it ends by itself. */
export default function Grant({ loaderData: { grant }, actionData }: Route.ComponentProps) {
	const { t } = useTranslation("network");
	const format = useFormat();
	const words = useGrantWords();
	const typed = actionData?.values.endsOn;
	return (
		<Page title={t("people.end.title", { name: grant.name })} lead={t("people.end.lead")} width="narrow">
			<ErrorSummary problems={actionData?.problems} labels={{ endsOn: t("people.endsOn") }} />
			{actionData?.refused && (
				<NotDone answer={actionData} tone="attention">
					{t(`people.end.${actionData.refused}`)}
				</NotDone>
			)}
			<DescriptionList
				items={[
					{
						term: t("people.person"),
						detail: grant.email ? t("log.person", { name: grant.name, email: grant.email }) : grant.name,
					},
					{ term: t("people.role"), detail: words({ ...grant, operationName: null }) },
					{
						term: t("people.since"),
						detail: grant.grantedBy
							? t("people.sinceBy", { moment: format.moment(grant.grantedAt), name: grant.grantedBy })
							: format.moment(grant.grantedAt),
					},
				]}
			/>
			<Section title={t("people.endsOn")}>
				<Form method="post" noValidate>
					<TextField
						name="endsOn"
						type="date"
						label={t("people.endsOn")}
						help={t("people.endsOnHelp")}
						optional
						defaultValue={typeof typed === "string" ? typed : (grant.endsOn ?? "")}
						problem={actionData?.problems.find((problem) => problem.field === "endsOn")}
					/>
					<div className="flex flex-wrap items-center gap-4">
						<Button>{t("people.end.save")}</Button>
						<Link to={href("/network")}>{t("people.end.back")}</Link>
					</div>
				</Form>
			</Section>
		</Page>
	);
}

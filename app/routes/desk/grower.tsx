import { useTranslation } from "react-i18next";
import { data, href, Link, redirect } from "react-router";
import { z } from "zod";
import type { Route } from "./+types/grower";
import { requireAssociate } from "#app/auth/guard.server.ts";
import { sessionContext } from "#app/auth/session.server.ts";
import { sendNewLink } from "#app/collect/new-link.server.ts";
import { listOperationSurveys } from "#app/collect/operation-surveys.server.ts";
import { DescriptionList } from "#app/components/description-list.tsx";
import { Notice } from "#app/components/notice.tsx";
import { Page } from "#app/components/page.tsx";
import { Section } from "#app/components/section.tsx";
import { StatusBadge } from "#app/components/status-badge.tsx";
import { findOperation } from "#app/directory/operations.server.ts";
import { parseForm } from "#app/lib/parse-form.ts";
import { refusal } from "#app/lib/refusal.ts";
import { useGrowerName } from "./parts/grower-name.ts";
import { PlantingTable } from "./parts/planting-table.tsx";
import { SurveysOfGrower } from "./parts/surveys-of-grower.tsx";

export async function loader({ context, params }: Route.LoaderArgs) {
	const desk = requireAssociate(context);
	const found = await desk.transaction(async (trx) => {
		const operation = await findOperation(trx, desk.viewer, params.operationId);
		return operation && { operation, surveys: await listOperationSurveys(trx, desk.viewer, operation.operationId) };
	});
	if (!found) throw refusal("operation_not_found");
	return found;
}

const LinkForm = z.object({ surveyId: z.guid(), wave: z.coerce.number().int().min(1) });

/** Sends a new personal link for one survey; the links sent before end. */
export async function action({ context, params, request }: Route.ActionArgs) {
	const desk = requireAssociate(context);
	const form = parseForm(LinkForm, await request.formData());
	if (!form.ok) throw refusal("form_not_understood");

	const { surveyId, wave } = form.value;
	const outcome = await desk.transaction((trx) => sendNewLink(trx, desk.viewer, surveyId, params.operationId, wave));
	if (outcome === "not_found") throw refusal("operation_not_found");
	if (typeof outcome === "string") return data({ refused: outcome }, { status: 409 });
	context.get(sessionContext).flash("toast", { key: "desk:grower.linkSent", values: { name: outcome.name } });
	return redirect(href("/desk/growers/:operationId", params), 303);
}

export default function GrowerPage({ loaderData, actionData }: Route.ComponentProps) {
	const { operation, surveys } = loaderData;
	const { t } = useTranslation("desk");
	const nameOf = useGrowerName();
	return (
		<Page title={nameOf(operation.name)}>
			<p className="no-print mb-4">
				<Link to={href("/desk/growers")}>{t("grower.back")}</Link>
			</p>
			{actionData && <Notice tone="attention">{t(`grower.refused.${actionData.refused}`)}</Notice>}
			<Contact operation={operation} />
			<Section title={t("grower.plantings")}>
				<PlantingTable plantings={operation.plantings} />
			</Section>
			<Section title={t("surveys.title")}>
				<SurveysOfGrower surveys={surveys} operation={operation} />
			</Section>
		</Page>
	);
}

function Contact({ operation }: { operation: Route.ComponentProps["loaderData"]["operation"] }) {
	const { t } = useTranslation("desk");
	const { email, phone, status } = operation;
	return (
		<DescriptionList
			items={[
				{ term: t("growers.contact"), detail: operation.contactName },
				{
					term: t("grower.email"),
					detail: email ? (
						<a href={`mailto:${encodeURIComponent(email).replace("%40", "@")}`}>{email}</a>
					) : (
						t("mail_failure.no_address")
					),
				},
				{
					term: t("grower.mailWanted"),
					detail: t(operation.mailWanted ? "grower.mailIsWanted" : "mail_failure.not_wanted"),
				},
				{
					term: t("grower.phone"),
					detail: phone ? <a href={`tel:${phone.replace(/[^\d+]/g, "")}`}>{phone}</a> : t("grower.noPhone"),
				},
				{ term: t("grower.owner"), detail: operation.ownerName },
				{
					term: t("common:areaKind.county"),
					detail: t("growers.county", { county: operation.countyName, state: operation.statePostal }),
				},
				{ term: t("response.language"), detail: t(`common:language.${operation.language}`) },
				{
					term: t("grower.massUnit"),
					detail: t(`grower:screen.unit.${operation.massUnit}`),
				},
				{
					term: t("grower.status"),
					detail: (
						<StatusBadge tone={status === "active" ? "good" : "neutral"}>
							{t(`grower.statusOf.${status === "active" ? "active" : "left"}`)}
						</StatusBadge>
					),
				},
			]}
		/>
	);
}

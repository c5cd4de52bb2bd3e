import { useTranslation } from "react-i18next";
import { data, href, Link, redirect } from "react-router";
import { z } from "zod";
import type { Route } from "./+types/grower";
import { listGrantees } from "#app/auth/grantees.server.ts";
import { requireAssociate } from "#app/auth/guard.server.ts";
import { sessionContext } from "#app/auth/session.server.ts";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { ContactForm } from "#app/collect/contacts.schema.ts";
import { listContacts, noteContact } from "#app/collect/contacts.server.ts";
import { sendNewLink } from "#app/collect/new-link.server.ts";
import { listFrozenFrames } from "#app/collect/frozen-frames.server.ts";
import { listOperationSurveys } from "#app/collect/operation-surveys.server.ts";
import { markReachable } from "#app/collect/reach.server.ts";
import { ButtonLink } from "#app/components/button.tsx";
import { DescriptionList } from "#app/components/description-list.tsx";
import { ErrorSummary } from "#app/components/error-summary.tsx";
import { Notice } from "#app/components/notice.tsx";
import { Page } from "#app/components/page.tsx";
import { Section } from "#app/components/section.tsx";
import { StatusBadge } from "#app/components/status-badge.tsx";
import { mendAddress } from "#app/directory/mail-address.server.ts";
import { findOperation } from "#app/directory/operations.server.ts";
import { putBackPlanting } from "#app/directory/plantings.server.ts";
import { findWaiver, recordWaiver } from "#app/directory/waiver.server.ts";
import { lookAgain } from "#app/lib/look-again.ts";
import { parseForm } from "#app/lib/parse-form.ts";
import { refusal } from "#app/lib/refusal.ts";
import { MergedNotice } from "./parts/merging/merged-notice.tsx";
import { AddressForm } from "./parts/address-form.tsx";
import { useContactLabels } from "./parts/growers/contact-fields.tsx";
import { Contacts } from "./parts/growers/contacts.tsx";
import { FrozenFrames } from "./parts/growers/frozen-frames.tsx";
import { People } from "./parts/growers/people.tsx";
import { useGrowerName } from "./parts/grower-name.ts";
import { PlantingTable } from "./parts/planting-table.tsx";
import { SurveysOfGrower } from "./parts/surveys-of-grower.tsx";
import { WaiverForm } from "./parts/waiver-form.tsx";

export async function loader({ context, params }: Route.LoaderArgs) {
	const desk = requireAssociate(context);
	const found = await desk.transaction(async (trx) => {
		const operation = await findOperation(trx, desk.viewer, params.operationId);
		if (!operation) return undefined;
		const { operationId } = operation;
		return {
			operation,
			waiver: (await findWaiver(trx, desk.viewer, operationId)) ?? null,
			surveys: await listOperationSurveys(trx, desk.viewer, operationId),
			people: await listGrantees(trx, operationId),
			contacts: await listContacts(trx, operationId),
			frames: await listFrozenFrames(trx, desk.viewer, operationId),
		};
	});
	if (!found) throw refusal("operation_not_found");
	return found;
}

const Step = z.discriminatedUnion("step", [
	z.object({ step: z.literal("link"), surveyId: z.guid(), wave: z.coerce.number().int().min(1) }),
	ContactForm.safeExtend({ step: z.literal("contact") }),
	z.object({ step: z.literal("address"), email: z.email("email_wrong").max(254, "too_long").optional() }),
	z.object({ step: z.enum(["allow", "disallow"]) }),
	z.object({ step: z.literal("put_back"), plantingId: z.guid() }),
]);

/**
 * Sends a new personal link for one survey, which ends the links sent before; mends the address that mail goes to; records
 * whether the owner allows publication; or lets a planting stand again.
 */
export async function action({ context, params, request }: Route.ActionArgs) {
	const desk = requireAssociate(context);
	const form = parseForm(Step, await request.formData());
	if (!form.ok && form.values.step !== "address" && form.values.step !== "contact")
		throw refusal("form_not_understood");
	if (!form.ok) return data({ refused: null, values: form.values, problems: form.problems }, { status: 400 });

	const { value: step } = form;
	const { operationId } = params;
	const outcome = await desk.transaction(async (trx) => {
		if (step.step === "contact") return noteContact(trx, desk.viewer, operationId, step);
		if (step.step === "link") return sendNewLink(trx, desk.viewer, step.surveyId, operationId, step.wave);
		if (step.step === "address") return mend(trx, desk.viewer, operationId, step.email ?? null);
		if (step.step === "put_back")
			return putBackPlanting(trx, desk.viewer, { operationId, plantingId: step.plantingId });
		const recorded = await recordWaiver(trx, desk.viewer, operationId, step.step === "allow");
		return recorded === "not_found" ? recorded : { waiver: step.step };
	});
	if (outcome === "not_found") throw refusal("operation_not_found");
	if (outcome === "noted" || outcome === "put_back") {
		const key = outcome === "noted" ? "growers:contact.saved" : "growers:planting.toast.put_back";
		context.get(sessionContext).flash("toast", { key });
		return redirect(href("/desk/growers/:operationId", params), 303);
	}
	if (typeof outcome === "string") return data({ refused: outcome, values: undefined, problems: [] }, { status: 409 });
	context.get(sessionContext).flash("toast", toastOf(outcome));
	return redirect(href("/desk/growers/:operationId", params), 303);
}

function toastOf(outcome: { name: string } | { waiver: "allow" | "disallow" } | { mended: string }) {
	if ("name" in outcome) return { key: "desk:grower.linkSent", values: { name: outcome.name } };
	if ("waiver" in outcome)
		return { key: `desk:grower.waiver.${outcome.waiver === "allow" ? "recorded" : "withdrawn"}` };
	return { key: "desk:grower.address.saved" };
}

async function mend(trx: Trx, viewer: Associate, operationId: string, email: string | null) {
	const mended = await mendAddress(trx, viewer, operationId, email);
	if (mended === "not_found") return mended;
	if (mended === "mended") await markReachable(trx, operationId);
	return { mended };
}

export const shouldRevalidate = lookAgain;

export default function GrowerPage({ loaderData, actionData }: Route.ComponentProps) {
	const { operation, surveys, people, contacts, waiver, frames } = loaderData;
	const { t } = useTranslation("desk");
	const sent = actionData?.values?.step;
	const ofContact = sent === "contact" ? { values: actionData?.values, problems: actionData?.problems } : {};
	const ofAddress = sent === "address" ? { values: actionData?.values, problems: actionData?.problems } : {};
	const nameOf = useGrowerName();
	const contactLabels = useContactLabels();
	return (
		<Page
			title={nameOf(operation.name)}
			actions={
				operation.status === "active" && (
					<ButtonLink
						to={href("/desk/growers/:operationId/edit", { operationId: operation.operationId })}
						kind="secondary"
					>
						{t("growers:edit.button")}
					</ButtonLink>
				)
			}
		>
			<p className="no-print mb-4">
				<Link to={href("/desk/growers")}>{t("grower.back")}</Link>
			</p>
			<ErrorSummary problems={actionData?.problems} labels={{ ...contactLabels, email: t("grower.email") }} />
			{actionData?.refused && <Notice tone="attention">{t(`grower.refused.${actionData.refused}`)}</Notice>}
			<Contact operation={operation} />
			<MergedNotice operation={operation} />
			{operation.status === "active" && (
				<AddressForm email={operation.email} returned={operation.mailReturnedAt !== null} {...ofAddress} />
			)}
			{operation.status === "active" && <WaiverForm waiver={waiver} ownerName={operation.ownerName} />}
			<Section title={t("grower.plantings")}>
				<PlantingTable operation={operation} />
				<FrozenFrames frames={frames} />
			</Section>
			<Section title={t("surveys.title")}>
				<SurveysOfGrower surveys={surveys} operation={operation} />
			</Section>
			<Contacts
				contacts={contacts}
				timeZone={operation.timeZone}
				canNote={operation.status === "active"}
				{...ofContact}
			/>
			<People people={people} />
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

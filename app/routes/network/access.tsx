import type { TFunction } from "i18next";
import { useTranslation } from "react-i18next";
import { data, Form, href, redirect } from "react-router";
import type { Route } from "./+types/access";
import { requireCoordinator } from "#app/auth/guard.server.ts";
import {
	AccessDecision,
	type AccessRequest,
	decideAccess,
	listAccessRequests,
} from "#app/auth/research-access.server.ts";
import { sessionContext } from "#app/auth/session.server.ts";
import { Button } from "#app/components/button.tsx";
import { DescriptionList } from "#app/components/description-list.tsx";
import { EmptyState } from "#app/components/empty-state.tsx";
import { ErrorSummary } from "#app/components/error-summary.tsx";
import { Page } from "#app/components/page.tsx";
import { Section } from "#app/components/section.tsx";
import { StatusBadge } from "#app/components/status-badge.tsx";
import { TextField } from "#app/components/text-field.tsx";
import { useFormat } from "#app/i18n/use-format.ts";
import { parseForm } from "#app/lib/parse-form.ts";
import { refusal } from "#app/lib/refusal.ts";

export async function loader({ context }: Route.LoaderArgs) {
	const network = requireCoordinator(context);
	const requests = await network.transaction((trx) => listAccessRequests(trx, network.viewer));
	return { requests: requests.map((request) => ({ ...request, own: request.personId === network.viewer.personId })) };
}

export async function action({ context, request }: Route.ActionArgs) {
	const network = requireCoordinator(context);
	const form = parseForm(AccessDecision, await request.formData());
	if (!form.ok) return data({ values: form.values, problems: form.problems }, { status: 400 });

	const outcome = await network.transaction((trx) => decideAccess(trx, network.viewer, form.value));
	if (outcome === "not_found") throw refusal("request_not_found");
	context.get(sessionContext).flash("toast", { key: `dataroom:requests.toast.${outcome}` });
	return redirect(href("/network/access"), 303);
}

export default function Access({ loaderData, actionData }: Route.ComponentProps) {
	const { t } = useTranslation("dataroom");
	const open = loaderData.requests.filter((request) => !request.decision);
	const decided = loaderData.requests.filter((request) => request.decision);
	return (
		<Page title={t("requests.title")} lead={t("requests.lead")} width="narrow">
			<ErrorSummary problems={actionData?.problems} labels={{ reason: t("requests.yourReason") }} />
			<Section title={t("requests.open")}>
				{open.length === 0 && <EmptyState title={t("requests.noneTitle")}>{t("requests.noneBody")}</EmptyState>}
				{/* One form at a time, the longest waiting first: a reason is written for this request and no other. */}
				{open.map((request, place) => (
					<RequestCard
						key={request.accessRequestId}
						request={request}
						form={place > 0 ? null : request.own ? "own" : "decide"}
						actionData={actionData}
					/>
				))}
			</Section>
			{decided.length > 0 && (
				<Section title={t("requests.decided")}>
					{decided.map((request) => (
						<RequestCard key={request.accessRequestId} request={request} />
					))}
				</Section>
			)}
		</Page>
	);
}

type CardProps = { request: AccessRequest; form?: "own" | "decide" | null } & Partial<
	Pick<Route.ComponentProps, "actionData">
>;

function RequestCard({ request, actionData, form }: CardProps) {
	const { t } = useTranslation("dataroom");
	const format = useFormat();
	return (
		<article className="mb-8" aria-label={request.name}>
			<h3 className="mb-2 text-lg">
				{request.name}{" "}
				{request.decision && (
					<StatusBadge tone={request.decision === "approved" ? "good" : "stop"}>
						{t(`requests.decision.${request.decision}`)}
					</StatusBadge>
				)}
			</h3>
			<DescriptionList
				items={[
					{ term: t("requests.email"), detail: request.email ?? "" },
					{ term: t("requests.affiliation"), detail: request.affiliation },
					{ term: t("requests.purpose"), detail: <p className="whitespace-pre-line">{request.purpose}</p> },
					...(request.decision ? [] : [{ term: t("requests.before"), detail: accessBefore(request, format, t) }]),
					{ term: t("requests.when"), detail: format.moment(request.requestedAt) },
					{ term: t("requests.agreement"), detail: request.agreementVersion },
					...(request.decisionReason ? [{ term: t("requests.reason"), detail: request.decisionReason }] : []),
				]}
			/>
			{form === "own" && <p className="mt-3 text-attention">{t("requests.own")}</p>}
			{form === "decide" && <DecideForm request={request} actionData={actionData} />}
		</article>
	);
}

/** Whether it is a first request or one for another year. */
function accessBefore(
	{ holds, lastDay }: AccessRequest,
	format: ReturnType<typeof useFormat>,
	t: TFunction<"dataroom">,
) {
	if (holds === null) return t("requests.never");
	const day = lastDay ? format.day(lastDay) : "";
	if (holds) return lastDay ? t("requests.until", { day }) : t("requests.withoutEnd");
	return t("requests.endedOn", { day });
}

function DecideForm({ request, actionData }: CardProps) {
	const { t } = useTranslation("dataroom");
	const mine = actionData?.values.accessRequestId === request.accessRequestId ? actionData : undefined;
	const typed = mine?.values.reason;
	return (
		<Form method="post" className="mt-4">
			<input type="hidden" name="accessRequestId" value={request.accessRequestId} />
			<TextField
				name="reason"
				label={t("requests.yourReason")}
				help={t("requests.reasonHelp")}
				optional
				multiline
				rows={2}
				maxLength={2000}
				defaultValue={typeof typed === "string" ? typed : ""}
				problem={mine?.problems.find((problem) => problem.field === "reason")}
			/>
			<div className="mt-4 flex flex-wrap gap-3">
				<Button name="decision" value="approved">
					{t("requests.approve")}
				</Button>
				<Button name="decision" value="declined" kind="secondary">
					{t("requests.decline")}
				</Button>
			</div>
		</Form>
	);
}

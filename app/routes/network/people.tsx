import { useTranslation } from "react-i18next";
import { data, Form, href, Link, redirect } from "react-router";
import type { Route } from "./+types/people";
import { requireCoordinator } from "#app/auth/guard.server.ts";
import { GrantForm, grantRole, listPeople, listStates, revokeGrant } from "#app/auth/grants.server.ts";
import { listInvitations } from "#app/auth/invitations.server.ts";
import { sessionContext } from "#app/auth/session.server.ts";
import { Confirm } from "#app/components/confirm.tsx";
import { DataTable } from "#app/components/data-table.tsx";
import { ErrorSummary } from "#app/components/error-summary.tsx";
import { Notice } from "#app/components/notice.tsx";
import { Page } from "#app/components/page.tsx";
import { useFormat } from "#app/i18n/use-format.ts";
import { lookAgain } from "#app/lib/look-again.ts";
import { type FormValues, parseForm, type Problem } from "#app/lib/parse-form.ts";
import { GrantPart } from "./parts/people/grant-part.tsx";
import { useGrantWords } from "./parts/people/grant-words.ts";
import { InvitationTable } from "./parts/people/invitation-table.tsx";

export async function loader({ context }: Route.LoaderArgs) {
	const network = requireCoordinator(context);
	return network.transaction(async (trx) => ({
		people: await listPeople(trx, network.viewer),
		states: await listStates(trx),
		invitations: await listInvitations(trx, network.viewer),
	}));
}

export async function action({ context, request }: Route.ActionArgs) {
	const network = requireCoordinator(context);
	const form = parseForm(GrantForm, await request.formData());
	if (!form.ok) return data({ values: form.values, problems: form.problems, refused: null }, { status: 400 });

	const { value } = form;
	const outcome = await network.transaction((trx) =>
		value.step === "grant"
			? grantRole(trx, network.viewer, value)
			: revokeGrant(trx, network.viewer, value.roleGrantId),
	);
	const values: FormValues = value;
	const problem = problemOf(outcome);
	if (problem) return data({ values, problems: [problem], refused: null }, { status: 400 });
	if (outcome !== "granted" && outcome !== "revoked")
		return data({ values, problems: [], refused: outcome }, { status: 409 });
	context.get(sessionContext).flash("toast", { key: `network:people.toast.${outcome}` });
	return redirect(href("/network"), 303);
}

/** What can be mended in a field is said there. */
function problemOf(outcome: string): Problem | undefined {
	if (outcome === "operation_needed") return { field: "operation", code: "empty" };
	if (outcome === "end_past" || outcome === "end_far") return { field: "endsOn", code: outcome };
	if (outcome === "operation_unknown" || outcome === "operation_several") return { field: "operation", code: outcome };
	return undefined;
}

export const shouldRevalidate = lookAgain;

export default function People({ loaderData, actionData }: Route.ComponentProps) {
	const { t } = useTranslation("network");
	const { people } = loaderData;
	return (
		<Page title={t("people.title")} lead={t("people.lead")}>
			<ErrorSummary
				problems={actionData?.problems}
				labels={{
					personId: t("people.person"),
					role: t("people.role"),
					stateFips: t("people.state"),
					operation: t("people.operation"),
					endsOn: t("people.endsOn"),
				}}
			/>
			{actionData?.refused && <Notice tone="attention">{t(`people.refused.${actionData.refused}`)}</Notice>}
			<DataTable
				caption={t("people.title")}
				captionHidden
				rows={people}
				rowKey={(person) => person.personId}
				columns={[
					{
						key: "name",
						header: t("people.person"),
						cell: (person) => (
							<>
								{person.displayName}
								<span className="block text-xs text-quiet">{person.email}</span>
							</>
						),
					},
					{
						key: "grants",
						header: t("people.grants"),
						cell: (person) =>
							person.grants.length === 0
								? t("people.none")
								: person.grants.map((grant) => <GrantLine key={grant.roleGrantId} grant={grant} />),
					},
				]}
			/>
			<InvitationTable invitations={loaderData.invitations} />
			<GrantPart {...loaderData} actionData={actionData} />
		</Page>
	);
}

type Grant = Route.ComponentProps["loaderData"]["people"][number]["grants"][number];

function GrantLine({ grant }: { grant: Grant }) {
	const { t } = useTranslation("network");
	const format = useFormat();
	const words = useGrantWords()(grant);
	return (
		<Form method="post" className="mb-2 flex flex-wrap items-center gap-3">
			<span>
				{words}
				{grant.endsOn && (
					<span className="block text-xs text-quiet">{t("people.until", { day: format.day(grant.endsOn) })}</span>
				)}
			</span>
			<Link
				to={href("/network/grants/:roleGrantId", { roleGrantId: grant.roleGrantId })}
				aria-label={t("people.changeEnd", { role: words })}
				className="inline-flex min-h-11 items-center"
			>
				{t("people.changeEndShort")}
			</Link>
			<Confirm
				trigger={t("people.revoke", { role: words })}
				title={t("people.revokeTitle", { role: words })}
				body={t("people.revokeBody")}
				confirmLabel={t("people.revokeConfirm")}
				name="step"
				value="revoke"
				danger
			>
				<input type="hidden" name="roleGrantId" value={grant.roleGrantId} />
			</Confirm>
		</Form>
	);
}

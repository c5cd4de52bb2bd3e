import { useTranslation } from "react-i18next";
import { data, Form, href, redirect } from "react-router";
import type { Route } from "./+types/people";
import { requireCoordinator } from "#app/auth/guard.server.ts";
import { GrantForm, grantRole, listPeople, listStates, revokeGrant } from "#app/auth/grants.server.ts";
import { sessionContext } from "#app/auth/session.server.ts";
import { Button } from "#app/components/button.tsx";
import { ChoiceField } from "#app/components/choice-field.tsx";
import { Confirm } from "#app/components/confirm.tsx";
import { DataTable } from "#app/components/data-table.tsx";
import { ErrorSummary } from "#app/components/error-summary.tsx";
import { Notice } from "#app/components/notice.tsx";
import { Page } from "#app/components/page.tsx";
import { Section } from "#app/components/section.tsx";
import { TextField } from "#app/components/text-field.tsx";
import { lookAgain } from "#app/lib/look-again.ts";
import { type FormValues, parseForm, type Problem } from "#app/lib/parse-form.ts";

export async function loader({ context }: Route.LoaderArgs) {
	const network = requireCoordinator(context);
	return network.transaction(async (trx) => ({
		people: await listPeople(trx, network.viewer),
		states: await listStates(trx),
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
			<GrantPart {...loaderData} actionData={actionData} />
		</Page>
	);
}

type Grant = Route.ComponentProps["loaderData"]["people"][number]["grants"][number];

function GrantLine({ grant }: { grant: Grant }) {
	const { t } = useTranslation("network");
	const role = t(`common:role.${grant.role}`);
	const words = grant.stateFips
		? t("people.roleIn", { role, state: t(`common:state.${grant.stateFips}`) })
		: grant.operationName
			? t("people.roleFor", { role, operation: grant.operationName })
			: role;
	return (
		<Form method="post" className="mb-2 flex flex-wrap items-center gap-3">
			<span>{words}</span>
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

type GrantPartProps = Route.ComponentProps["loaderData"] & Pick<Route.ComponentProps, "actionData">;

function GrantPart({ people, states, actionData }: GrantPartProps) {
	const { t } = useTranslation("network");
	const values: Record<string, unknown> = actionData?.values ?? {};
	const field = (name: "personId" | "role" | "stateFips") => ({
		kind: "select" as const,
		name,
		defaultValue: typeof values[name] === "string" ? values[name] : "",
		problem: actionData?.problems.find((problem) => problem.field === name),
	});
	return (
		<Section title={t("people.grantTitle")}>
			<Form method="post" noValidate className="grid max-w-xl gap-5">
				<ChoiceField
					{...field("personId")}
					legend={t("people.person")}
					options={people.map((person) => ({
						value: person.personId,
						label: person.email ? `${person.displayName}, ${person.email}` : person.displayName,
					}))}
				/>
				<ChoiceField
					{...field("role")}
					legend={t("people.role")}
					options={(["associate", "grower", "coordinator", "researcher"] as const).map((role) => ({
						value: role,
						label: t(`common:role.${role}`),
					}))}
				/>
				<ChoiceField
					{...field("stateFips")}
					legend={t("people.state")}
					help={t("people.stateHelp")}
					options={states.map((state) => ({ value: state, label: t(`common:state.${state}`) }))}
				/>
				<TextField
					name="operation"
					label={t("people.operation")}
					help={t("people.operationHelp")}
					optional
					maxLength={254}
					size="full"
					defaultValue={typeof values.operation === "string" ? values.operation : ""}
					problem={actionData?.problems.find((problem) => problem.field === "operation")}
				/>
				<div>
					<Button name="step" value="grant">
						{t("people.grant")}
					</Button>
				</div>
			</Form>
		</Section>
	);
}

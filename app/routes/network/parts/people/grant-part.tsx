import { useTranslation } from "react-i18next";
import { Form } from "react-router";
import { Button } from "#app/components/button.tsx";
import { ChoiceField } from "#app/components/choice-field.tsx";
import { Section } from "#app/components/section.tsx";
import { TextField } from "#app/components/text-field.tsx";
import type { FormValues, Problem } from "#app/lib/parse-form.ts";

type GrantPartProps = {
	people: { personId: string; displayName: string; email: string | null }[];
	states: string[];
	actionData?: { values: FormValues; problems: Problem[] };
};

/** Grants a role to somebody who has signed in once. */
export function GrantPart({ people, states, actionData }: GrantPartProps) {
	const { t } = useTranslation("network");
	const values: FormValues = actionData?.values ?? {};
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
				<TextField
					name="endsOn"
					type="date"
					label={t("people.endsOn")}
					help={t("people.endsOnHelp")}
					optional
					defaultValue={typeof values.endsOn === "string" ? values.endsOn : ""}
					problem={actionData?.problems.find((problem) => problem.field === "endsOn")}
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

import { useTranslation } from "react-i18next";
import { Form } from "react-router";
import { contactOutcomes, contactWays } from "#app/collect/contacts.schema.ts";
import type { Contact } from "#app/collect/contacts.server.ts";
import { Button } from "#app/components/button.tsx";
import { ChoiceField } from "#app/components/choice-field.tsx";
import { DataTable } from "#app/components/data-table.tsx";
import { Section } from "#app/components/section.tsx";
import { TextField } from "#app/components/text-field.tsx";
import { useFormat } from "#app/i18n/use-format.ts";
import type { FormValues, Problem } from "#app/lib/parse-form.ts";

type ContactsProps = {
	contacts: Contact[];
	timeZone: string;
	canNote: boolean;
	values?: FormValues;
	problems?: Problem[];
};

/** Calls, visits and letters with what came of them, and a form for the next. */
export function Contacts({ contacts, timeZone, canNote, values, problems }: ContactsProps) {
	const { t } = useTranslation("growers");
	const format = useFormat();
	const field = (name: string, plain = "") => ({
		name,
		defaultValue: values ? String(values[name] ?? "") : plain,
		problem: problems?.find((problem) => problem.field === name),
	});
	return (
		<Section title={t("contact.title")}>
			{contacts.length > 0 && (
				<DataTable
					caption={t("contact.title")}
					captionHidden
					rows={contacts}
					rowKey={(row) => row.contactId}
					columns={[
						{ key: "when", header: t("import.log.when"), cell: (row) => format.moment(row.madeAt, timeZone) },
						{ key: "who", header: t("import.log.who"), cell: (row) => row.personName },
						{ key: "way", header: t("contact.way"), cell: (row) => t(`contact.ways.${row.way}`) },
						{ key: "outcome", header: t("contact.outcome"), cell: (row) => t(`contact.outcomes.${row.outcome}`) },
						{ key: "note", header: t("contact.note"), cell: (row) => row.note },
						{ key: "next", header: t("contact.nextOn"), cell: (row) => row.nextOn && format.day(row.nextOn) },
					]}
				/>
			)}
			{canNote && (
				<details className="no-print mt-3" open={problems ? true : undefined}>
					<summary className="min-h-9 cursor-pointer text-damson underline underline-offset-4">
						{t("contact.add")}
					</summary>
					<Form method="post" noValidate key={contacts.length} className="mt-4">
						<ChoiceField
							{...field("way", "telephone")}
							kind="select"
							legend={t("contact.way")}
							options={contactWays.map((value) => ({ value, label: t(`contact.ways.${value}`) }))}
						/>
						<ChoiceField
							{...field("outcome", "reached")}
							kind="select"
							legend={t("contact.outcome")}
							options={contactOutcomes.map((value) => ({ value, label: t(`contact.outcomes.${value}`) }))}
						/>
						<TextField {...field("note")} label={t("contact.note")} multiline maxLength={2000} optional />
						<TextField {...field("nextOn")} label={t("contact.nextOn")} type="date" optional />
						<Button kind="secondary" name="step" value="contact">
							{t("contact.save")}
						</Button>
					</Form>
				</details>
			)}
		</Section>
	);
}

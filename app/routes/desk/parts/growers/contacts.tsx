import { useTranslation } from "react-i18next";
import { Form } from "react-router";
import type { Contact } from "#app/collect/contacts.server.ts";
import { Button } from "#app/components/button.tsx";
import { DataTable } from "#app/components/data-table.tsx";
import { Section } from "#app/components/section.tsx";
import { useFormat } from "#app/i18n/use-format.ts";
import type { FormValues, Problem } from "#app/lib/parse-form.ts";
import { ContactFields } from "./contact-fields.tsx";

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
	return (
		<Section title={t("contact.title")}>
			{contacts.length > 0 && <ContactTable contacts={contacts} timeZone={timeZone} />}
			{canNote && (
				<details className="no-print mt-3" open={problems ? true : undefined}>
					<summary className="min-h-9 cursor-pointer text-damson underline underline-offset-4">
						{t("contact.add")}
					</summary>
					<Form method="post" noValidate key={contacts.length} className="mt-4">
						<ContactFields values={values} problems={problems} />
						<Button kind="secondary" name="step" value="contact">
							{t("contact.save")}
						</Button>
					</Form>
				</details>
			)}
		</Section>
	);
}

/** Contacts made with one operation, newest first. */
export function ContactTable({ contacts, timeZone }: { contacts: Contact[]; timeZone: string }) {
	const { t } = useTranslation("growers");
	const format = useFormat();
	return (
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
				{
					key: "next",
					header: t("contact.nextOn"),
					cell: (row) => row.nextOn && [format.day(row.nextOn), row.nextTime].filter(Boolean).join(", "),
				},
			]}
		/>
	);
}

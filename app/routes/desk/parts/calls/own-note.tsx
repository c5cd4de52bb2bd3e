import { useTranslation } from "react-i18next";
import { Form } from "react-router";
import type { ContactOutcome } from "#app/collect/contacts.schema.ts";
import { Button } from "#app/components/button.tsx";
import { Notice } from "#app/components/notice.tsx";
import { useGrowerName } from "../grower-name.ts";

type OwnNoteProps = { note: { name: string; outcome: ContactOutcome } };

/** What was noted last, with the way to take it back: a refusal noted in the wrong row would hide that grower. */
export function OwnNote({ note }: OwnNoteProps) {
	const { t } = useTranslation("answered");
	const name = useGrowerName()(note.name);
	return (
		<Notice tone="info">
			<p>{t("calls.noted", { name, outcome: t(`growers:contact.outcomes.${note.outcome}`) })}</p>
			<Form method="post" className="mt-2">
				<Button kind="secondary" name="step" value="take_back">
					{t("calls.takeBack")}
				</Button>
			</Form>
		</Notice>
	);
}

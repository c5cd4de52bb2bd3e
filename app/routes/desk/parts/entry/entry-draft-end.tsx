import { useTranslation } from "react-i18next";
import { Form } from "react-router";
import type { StepValues } from "#app/collect/posted.ts";
import { Button } from "#app/components/button.tsx";

/** A draft that can no longer be sent in can be thrown away, so that it does not wait for ever among those to finish. */
export function EntryDraftEnd({ values }: { values: StepValues }) {
	const { t } = useTranslation("answered");
	return (
		<Form method="post" className="mt-4">
			<input type="hidden" name="mode" value={values.mode} />
			<input type="hidden" name="language" value={values.language} />
			<Button kind="secondary" name="step" value="drop">
				{t("enter.drop")}
			</Button>
		</Form>
	);
}

import { useTranslation } from "react-i18next";
import { Form } from "react-router";
import { Button } from "#app/components/button.tsx";
import { Notice } from "#app/components/notice.tsx";
import { Section } from "#app/components/section.tsx";
import { TextField } from "#app/components/text-field.tsx";
import type { FormValues, Problem } from "#app/lib/parse-form.ts";

type AddressFormProps = { email: string | null; returned: boolean; values?: FormValues; problems?: Problem[] };

/** The address that an associate mends after ringing up: mail goes there again. */
export function AddressForm({ email, returned, values, problems }: AddressFormProps) {
	const { t } = useTranslation("desk");
	return (
		<Section title={t("grower.address.title")}>
			{returned && <Notice tone="attention">{t("grower.address.returned")}</Notice>}
			<Form method="post" noValidate key={email}>
				<TextField
					name="email"
					type="email"
					label={t("grower.email")}
					help={t("grower.address.help")}
					defaultValue={values ? String(values.email ?? "") : email}
					problem={problems?.find((problem) => problem.field === "email")}
					maxLength={254}
					size="full"
					optional
				/>
				<Button name="step" value="address" kind="secondary">
					{t("grower.address.save")}
				</Button>
			</Form>
		</Section>
	);
}

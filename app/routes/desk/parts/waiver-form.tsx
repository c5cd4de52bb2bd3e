import { useTranslation } from "react-i18next";
import { Form } from "react-router";
import { Confirm } from "#app/components/confirm.tsx";
import { Section } from "#app/components/section.tsx";
import { useFormat } from "#app/i18n/use-format.ts";

type WaiverFormProps = { waiver: { recordedAt: Date; recordedBy: string } | null; ownerName: string };

/** Whether the owner allows figures that the own part could be worked out of, and the button that records the other. */
export function WaiverForm({ waiver, ownerName }: WaiverFormProps) {
	const { t } = useTranslation("desk");
	const format = useFormat();
	return (
		<Section title={t("grower.waiver.title")}>
			<p className="mb-4 max-w-prose">
				{waiver
					? t("grower.waiver.allowed", {
							owner: ownerName,
							moment: format.moment(waiver.recordedAt),
							name: waiver.recordedBy,
						})
					: t("grower.waiver.notAllowed")}
			</p>
			<Form method="post" className="no-print">
				<Confirm
					trigger={t(waiver ? "grower.waiver.withdraw" : "grower.waiver.record")}
					title={t(waiver ? "grower.waiver.withdrawTitle" : "grower.waiver.recordTitle", { owner: ownerName })}
					body={t(waiver ? "grower.waiver.withdrawBody" : "grower.waiver.recordBody")}
					confirmLabel={t(waiver ? "grower.waiver.withdrawConfirm" : "grower.waiver.recordConfirm")}
					name="step"
					value={waiver ? "disallow" : "allow"}
				/>
			</Form>
		</Section>
	);
}

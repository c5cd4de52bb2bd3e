import { useTranslation } from "react-i18next";
import { Form } from "react-router";
import { Button } from "#app/components/button.tsx";
import { Confirm } from "#app/components/confirm.tsx";
import { Section } from "#app/components/section.tsx";
import { TextField } from "#app/components/text-field.tsx";
import { MinuteFields, type Sent, sentField, Way } from "./decision-parts.tsx";

/** The fields of a decision under their names, for the error summary. */
export function decisionLabels(t: (key: string) => string): Record<string, string> {
	return {
		note: t("review.note"),
		publishOn: t("review.publishOn"),
		publishAt: t("review.publishAt"),
		reasonEn: t("reason.en"),
		reasonEs: t("reason.es"),
	};
}

function useFields(sent: Sent) {
	const { t } = useTranslation("release");
	return sentField(decisionLabels(t), sent);
}

/** What can be done with an audited draft: published at once, at a set minute, or sent back. */
export function DecisionForms({ tomorrow, ...sent }: Sent & { tomorrow: string }) {
	const { t } = useTranslation("release");
	const field = useFields(sent);
	return (
		<Section title={t("review.decide")}>
			<Way title={t("review.approve")}>
				<p className="mb-4">{t("review.approveHelp")}</p>
				<Confirm
					trigger={t("review.approve")}
					title={t("review.approveTitle")}
					body={t("review.approveBody")}
					confirmLabel={t("review.approveConfirm")}
					name="decision"
					value="publish"
				/>
			</Way>
			<Way title={t("review.schedule")}>
				<p className="mb-4">{t("review.scheduleHelp")}</p>
				<MinuteFields field={field} tomorrow={tomorrow} />
				<Button kind="secondary" name="decision" value="schedule">
					{t("review.scheduleButton")}
				</Button>
			</Way>
			<Way title={t("review.reject")}>
				<TextField {...field("note")} help={t("review.noteHelp")} multiline rows={4} maxLength={2000} />
				<Button kind="secondary" name="decision" value="reject">
					{t("review.reject")}
				</Button>
			</Way>
		</Section>
	);
}

/** A scheduled draft can be taken back until its minute. */
export function UnscheduleForm() {
	const { t } = useTranslation("release");
	return (
		<Form method="post" className="no-print mt-6">
			<Confirm
				trigger={t("review.unschedule")}
				title={t("review.unscheduleTitle")}
				body={t("review.unscheduleBody")}
				confirmLabel={t("review.unschedule")}
				name="decision"
				value="unschedule"
			/>
		</Form>
	);
}

export function WithdrawForm(sent: Sent) {
	const { t } = useTranslation("release");
	const field = useFields(sent);
	return (
		<Section title={t("withdraw.title")}>
			<Form method="post" noValidate className="max-w-xl">
				<p className="mb-4">{t("withdraw.body")}</p>
				<TextField {...field("reasonEn")} help={t("withdraw.help")} multiline rows={3} maxLength={600} />
				<TextField {...field("reasonEs")} multiline rows={3} maxLength={600} />
				<Confirm
					danger
					trigger={t("withdraw.button")}
					title={t("withdraw.confirmTitle")}
					body={t("withdraw.confirmBody")}
					confirmLabel={t("withdraw.button")}
					name="decision"
					value="withdraw"
				/>
			</Form>
		</Section>
	);
}

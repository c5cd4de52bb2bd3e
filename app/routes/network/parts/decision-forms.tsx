import type { ReactNode } from "react";
import { useTranslation } from "react-i18next";
import { Form } from "react-router";
import { Button } from "#app/components/button.tsx";
import { Confirm } from "#app/components/confirm.tsx";
import { Section } from "#app/components/section.tsx";
import { TextField } from "#app/components/text-field.tsx";
import type { FormValues, Problem } from "#app/lib/parse-form.ts";

type Sent = { values?: FormValues; problems?: Problem[] };

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

function useFields({ values, problems }: Sent) {
	const { t } = useTranslation("release");
	const labels = decisionLabels(t);
	return (name: string, otherwise = "") => ({
		name,
		label: labels[name]!,
		defaultValue: typeof values?.[name] === "string" ? values[name] : otherwise,
		problem: problems?.find((problem) => problem.field === name),
	});
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
				<div className="flex flex-wrap items-end gap-x-8">
					<TextField {...field("publishOn", tomorrow)} type="date" size="medium" />
					<TextField {...field("publishAt", "08:00")} type="time" size="short" help={t("review.zone")} />
				</div>
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

function Way({ title, children }: { title: string; children: ReactNode }) {
	return (
		<Form method="post" noValidate className="mt-6 max-w-xl border-t border-rule pt-4">
			<h3 className="mb-2 text-lg font-bold">{title}</h3>
			{children}
		</Form>
	);
}

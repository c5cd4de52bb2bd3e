import { useTranslation } from "react-i18next";
import { Form } from "react-router";
import { Button } from "#app/components/button.tsx";
import { Confirm } from "#app/components/confirm.tsx";
import { Notice } from "#app/components/notice.tsx";
import { Section } from "#app/components/section.tsx";
import { TextField } from "#app/components/text-field.tsx";
import type { ReportState } from "#app/publish/drafting/reports.server.ts";
import { MinuteFields, type Sent, sentField, Way } from "./decision-parts.tsx";

type ReportDecisionsProps = { state: ReportState; own: boolean; tomorrow: string; sent?: Sent };

/** The fields of a decision under their names, for the error summary too. */
export function useDecisionLabels(): Record<string, string> {
	const { t } = useTranslation("public");
	return {
		note: t("report_review.note"),
		publishOn: t("release:review.publishOn"),
		publishAt: t("release:review.publishAt"),
		comment: t("report:comments.text"),
	};
}

/** What the second person can do with a report that was handed in: out at once, at a set minute, or back. */
export function ReportDecisions({ state, own, tomorrow, sent }: ReportDecisionsProps) {
	const { t } = useTranslation("public");
	if (state === "scheduled") return <Unschedule />;
	if (state !== "submitted") return null;
	return (
		<Section title={t("report_review.decide")}>
			{own ? (
				<Notice tone="attention" title={t("report_review.outcome.own_report")}>
					{t("report_review.ownBody")}
				</Notice>
			) : (
				<Approval tomorrow={tomorrow} sent={sent} />
			)}
			<SendBack sent={sent} />
		</Section>
	);
}

function useField(sent: Sent | undefined) {
	return sentField(useDecisionLabels(), sent);
}

function Approval({ tomorrow, sent }: Pick<ReportDecisionsProps, "tomorrow" | "sent">) {
	const { t } = useTranslation("public");
	const field = useField(sent);
	return (
		<>
			<Way title={t("report_review.publish")}>
				<Confirm
					trigger={t("report_review.publish")}
					title={t("report_review.publishTitle")}
					body={t("report_review.publishBody")}
					confirmLabel={t("report_review.publish")}
					name="intent"
					value="publish"
				/>
			</Way>
			<Way title={t("report:schedule.title")}>
				<p className="mb-4">{t("report:schedule.help")}</p>
				<MinuteFields field={field} tomorrow={tomorrow} />
				<Button kind="secondary" name="intent" value="schedule">
					{t("report:schedule.button")}
				</Button>
			</Way>
		</>
	);
}

function SendBack({ sent }: { sent?: Sent }) {
	const { t } = useTranslation("public");
	const field = useField(sent);
	return (
		<Way title={t("report_review.sendBack")}>
			<TextField {...field("note")} help={t("report_review.noteHelp")} multiline maxLength={4000} />
			<Button kind="secondary" name="intent" value="send_back">
				{t("report_review.sendBack")}
			</Button>
		</Way>
	);
}

function Unschedule() {
	const { t } = useTranslation("report");
	return (
		<Form method="post" className="no-print mt-6">
			<Confirm
				trigger={t("schedule.undo")}
				title={t("schedule.undoTitle")}
				body={t("schedule.undoBody")}
				confirmLabel={t("schedule.undo")}
				name="intent"
				value="unschedule"
			/>
		</Form>
	);
}

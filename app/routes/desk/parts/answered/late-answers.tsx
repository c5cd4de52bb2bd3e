import { useTranslation } from "react-i18next";
import { Form, href, Link, useSearchParams } from "react-router";
import type { LateAnswer } from "#app/collect/late-answers.server.ts";
import { Button } from "#app/components/button.tsx";
import { DataTable } from "#app/components/data-table.tsx";
import { Notice } from "#app/components/notice.tsx";
import { Section } from "#app/components/section.tsx";
import { StatusBadge } from "#app/components/status-badge.tsx";
import { TextField } from "#app/components/text-field.tsx";
import { useFormat } from "#app/i18n/use-format.ts";
import type { FormValues, Problem } from "#app/lib/parse-form.ts";
import { useGrowerName } from "../grower-name.ts";

type LateAnswersProps = {
	late: LateAnswer[];
	surveyId: string;
	/** Which of them is being decided. */
	chosen: string | null;
	values?: FormValues;
	problems?: Problem[];
	refused?: string | null;
};

/** What came after the closing, and whether it counts: for the associate to say while no release is drafted. */
export function LateAnswers({ late, surveyId, chosen, values, problems, refused }: LateAnswersProps) {
	const { t } = useTranslation("answered");
	const format = useFormat();
	const one = late.find(({ responseId, taken }) => responseId === chosen && taken === null);
	return (
		<Section title={t("late.title")} id="late">
			<p className="mb-4 max-w-prose">{t("late.lead")}</p>
			{refused && <Notice tone="attention">{t(`late.refused.${refused}`)}</Notice>}
			{one && <LateForm one={one} values={values} problems={problems} />}
			<DataTable
				caption={t("late.title")}
				captionHidden
				rows={late}
				rowKey={(row) => row.responseId}
				columns={[
					{ key: "name", header: t("desk:growers.name"), cell: (row) => <Answers row={row} surveyId={surveyId} /> },
					{ key: "sent", header: t("late.sentAt"), cell: (row) => format.moment(row.sentAt, row.timeZone) },
					{
						key: "before",
						header: t("late.before"),
						cell: (row) => t(row.countsAlready ? "late.countsAlready" : "late.countsNot"),
					},
					{ key: "decided", header: t("late.decision"), cell: (row) => <Decision row={row} /> },
				]}
			/>
		</Section>
	);
}

function Answers({ row, surveyId }: { row: LateAnswer; surveyId: string }) {
	const nameOf = useGrowerName();
	const { responseId, version } = row;
	return (
		<Link
			to={`${href("/desk/surveys/:surveyId/responses/:responseId", { surveyId, responseId })}?version=${version}`}
			className="print-plain"
		>
			{nameOf(row.name)}
		</Link>
	);
}

function Decision({ row: { responseId, name, taken, reason, decidedAt, decidedBy, timeZone } }: { row: LateAnswer }) {
	const { t } = useTranslation("answered");
	const format = useFormat();
	const nameOf = useGrowerName();
	const [search] = useSearchParams();
	if (taken === null) {
		const next = new URLSearchParams(search);
		next.set("late", responseId);
		return (
			<Link to={`?${next}#late`} aria-label={t("late.decideOf", { name: nameOf(name) })}>
				{t("late.decide")}
			</Link>
		);
	}
	return (
		<div className="min-w-40">
			<StatusBadge tone={taken ? "good" : "neutral"}>{t(taken ? "late.taken" : "late.left")}</StatusBadge>
			{reason && <span className="block max-w-72">{reason}</span>}
			{decidedAt && (
				<span className="block text-xs text-quiet">
					{t("late.decidedBy", { name: decidedBy, moment: format.moment(decidedAt, timeZone) })}
				</span>
			)}
		</div>
	);
}

type LateFormProps = { one: LateAnswer; values?: FormValues; problems?: Problem[] };

function LateForm({ one, values, problems }: LateFormProps) {
	const { t } = useTranslation("answered");
	const nameOf = useGrowerName();
	return (
		<Form method="post" noValidate className="mb-6 border-2 border-line p-5" key={one.responseId}>
			<p className="mb-4 font-bold">{t("late.decideOf", { name: nameOf(one.name) })}</p>
			<input type="hidden" name="responseId" value={one.responseId} />
			<input type="hidden" name="version" value={one.version} />
			<TextField
				name="reason"
				label={t("late.reason")}
				help={t("late.reasonHelp")}
				defaultValue={values ? String(values.reason ?? "") : ""}
				problem={problems?.find(({ field }) => field === "reason")}
				multiline
				rows={2}
				maxLength={2000}
			/>
			<div className="flex flex-wrap gap-4">
				<Button name="step" value="take">
					{t("late.take")}
				</Button>
				<Button kind="secondary" name="step" value="leave">
					{t("late.leave")}
				</Button>
			</div>
		</Form>
	);
}

import { useTranslation } from "react-i18next";
import { href, Link } from "react-router";
import type { MailCount } from "#app/collect/mail-counts.server.ts";
import type { Survey } from "#app/collect/surveys.server.ts";
import { DataTable } from "#app/components/data-table.tsx";
import { EmptyState } from "#app/components/empty-state.tsx";
import { Section } from "#app/components/section.tsx";
import { useFormat } from "#app/i18n/use-format.ts";

type MailCountsProps = { survey: Pick<Survey, "surveyId" | "timeZone">; counts: MailCount[] };

/** What was mailed, when, to how many, and why some of it did not go. */
export function MailCounts({ survey, counts }: MailCountsProps) {
	const { t } = useTranslation("desk");
	const format = useFormat();
	const moment = (at: Date) => format.moment(at, survey.timeZone);
	return (
		<Section title={t("mailing.sentTitle")}>
			<DataTable
				caption={t("mailing.sentTitle")}
				captionHidden
				rows={counts}
				rowKey={({ kind, wave }) => `${kind} ${wave}`}
				empty={<EmptyState title={t("mailing.noneTitle")}>{t("mailing.noneBody")}</EmptyState>}
				columns={[
					{
						key: "kind",
						header: t("mailing.mail"),
						cell: ({ kind, wave }) =>
							t(`mailing.kind.${kind}`) + (kind === "reminder" ? ` ${format.number(wave)}` : ""),
					},
					{ key: "queued", header: t("mailing.queued"), cell: ({ firstQueuedAt }) => moment(firstQueuedAt) },
					{
						key: "last",
						header: t("mailing.last"),
						cell: ({ lastSentAt }) => (lastSentAt ? moment(lastSentAt) : t("mailing.notYet")),
					},
					{ key: "sent", header: t("mailing.sent"), numeric: true, cell: ({ sent }) => format.number(sent) },
					{
						key: "waiting",
						header: t("mailing.waiting"),
						numeric: true,
						cell: ({ waiting }) => format.number(waiting),
					},
					{
						key: "failed",
						header: t("mailing.failed"),
						numeric: counts.every(({ failures }) => failures.length === 0),
						cell: (row) => <Failures row={row} />,
					},
				]}
			/>
			{counts.some(({ failures }) => failures.some(({ why }) => why === "returned")) && (
				<p className="mt-3">
					<Link
						to={`${href("/desk/surveys/:surveyId/responses", { surveyId: survey.surveyId })}?show=mail_returned`}
						className="print-plain"
					>
						{t("mailing.toReturned")}
					</Link>
				</p>
			)}
		</Section>
	);
}

function Failures({ row }: { row: MailCount }) {
	const { t } = useTranslation("desk");
	const format = useFormat();
	if (row.failures.length === 0) return format.number(0);
	return (
		<ul className="min-w-48">
			{row.failures.map(({ why, count }) => (
				<li key={why} className={why === "returned" || why === "uncertain" ? "text-attention" : undefined}>
					{t("mailing.failure", { count, value: format.number(count), why: t(`mail_failure.${why}`) })}
				</li>
			))}
		</ul>
	);
}

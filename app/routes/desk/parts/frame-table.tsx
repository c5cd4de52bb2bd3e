import { useTranslation } from "react-i18next";
import type { Disposition, FrameRow } from "#app/collect/frame-list.server.ts";
import { DataTable, type Sort } from "#app/components/data-table.tsx";
import { EmptyState } from "#app/components/empty-state.tsx";
import { StatusBadge } from "#app/components/status-badge.tsx";
import { useFormat } from "#app/i18n/use-format.ts";
import { AnsweredLink } from "./answered-link.tsx";
import { GrowerLink } from "./grower-link.tsx";
import { useGrowerName } from "./grower-name.ts";
import { MailState } from "./mail-state.tsx";

export const dispositionTones = {
	complete: "good",
	partial: "attention",
	reached: "attention",
	not_reached: "neutral",
	undeliverable: "stop",
	refused: "neutral",
	not_eligible: "neutral",
} as const satisfies Record<Disposition, string>;

type FrameTableProps = {
	rows: FrameRow[];
	sort: Sort;
	caption: string;
	surveyId: string;
	timeZone: string;
	empty: "draft" | "nobody" | "noMatch";
};

/** Growers of a survey's frame: whom to ring, what came back, and how their mails stand. */
export function FrameTable({ rows, sort, caption, surveyId, timeZone, empty }: FrameTableProps) {
	const { t } = useTranslation("desk");
	const nameOf = useGrowerName();
	return (
		<DataTable
			caption={caption}
			captionHidden
			rows={rows}
			rowKey={(row) => row.operationId}
			sort={sort}
			columns={[
				{ key: "name", header: t("growers.name"), sortable: true, cell: (row) => <Grower row={row} /> },
				{
					key: "county",
					header: t("common:areaKind.county"),
					sortable: true,
					cell: (row) => t("growers.county", { county: row.countyName, state: row.statePostal }),
				},
				{
					key: "disposition",
					header: t("responses.disposition"),
					sortable: true,
					cell: (row) => (
						<StatusBadge tone={dispositionTones[row.disposition]}>
							{t(`common:disposition.${row.disposition}`)}
						</StatusBadge>
					),
				},
				{
					key: "answered",
					header: t("responses.answered"),
					sortable: true,
					cell: (row) => <AnsweredLink {...row} surveyId={surveyId} of={nameOf(row.name)} timeZone={timeZone} />,
				},
				{ key: "mails", header: t("responses.mails"), cell: (row) => <LastMail row={row} timeZone={timeZone} /> },
			]}
			empty={<EmptyState title={t(`responses.empty.${empty}.title`)}>{t(`responses.empty.${empty}.body`)}</EmptyState>}
		/>
	);
}

/** With telephone number, since this is the list one rings from. */
function Grower({ row: { operationId, name, contactName, phone } }: { row: FrameRow }) {
	const nameOf = useGrowerName();
	return (
		<>
			<GrowerLink operationId={operationId} className="print-plain">
				{nameOf(name)}
			</GrowerLink>
			<span className="block text-xs text-quiet">{[contactName, phone].filter(Boolean).join(" · ")}</span>
		</>
	);
}

function LastMail({ row: { mails, email }, timeZone }: { row: FrameRow; timeZone: string }) {
	const { t } = useTranslation("desk");
	const format = useFormat();
	const last = mails.at(-1);
	return (
		<div className="min-w-48">
			{!email && <span className="block text-attention">{t("mail_failure.no_address")}</span>}
			{last ? (
				<MailState mail={last} timeZone={timeZone} />
			) : (
				email && <span className="text-quiet">{t("responses.noMail")}</span>
			)}
			{mails.length > 1 && (
				<span className="block text-xs text-quiet">
					{t("responses.mailCount", { count: mails.length, value: format.number(mails.length) })}
				</span>
			)}
		</div>
	);
}

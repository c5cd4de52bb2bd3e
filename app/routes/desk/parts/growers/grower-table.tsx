import { useTranslation } from "react-i18next";
import { href, Link } from "react-router";
import { DataTable } from "#app/components/data-table.tsx";
import { EmptyState } from "#app/components/empty-state.tsx";
import type { OperationQuery } from "#app/directory/operation.schema.ts";
import type { OperationRow } from "#app/directory/operation-list.server.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import { MailReach } from "./mail-reach.tsx";

export type GrowerRow = OperationRow & { answeredAt: Date | null };

/** A page of the list of growers, each with a box to choose it by. */
export function GrowerTable({ rows, query }: { rows: GrowerRow[]; query: OperationQuery }) {
	const { t } = useTranslation("growers");
	const format = useFormat();
	return (
		<DataTable
			caption={t("desk:growers.title")}
			captionHidden
			rows={rows}
			rowKey={(row) => row.operationId}
			sort={{ key: query.sort, direction: query.direction }}
			columns={[
				{ key: "name", header: t("desk:growers.name"), sortable: true, cell: (row) => <Name row={row} /> },
				{ key: "owner", header: t("desk:growers.contact"), sortable: true, cell: (row) => row.contactName },
				{
					key: "county",
					header: t("common:areaKind.county"),
					sortable: true,
					cell: (row) => t("desk:growers.county", { county: row.countyName, state: row.statePostal }),
				},
				{
					key: "crops",
					header: t("desk:survey.crops"),
					cell: (row) => format.list(row.cropKeys.map((crop) => t(`common:crop.${crop}`))),
				},
				{
					key: "trees",
					header: t("desk:growers.trees"),
					numeric: true,
					sortable: true,
					cell: (row) => format.number(row.bearingTrees),
				},
				{ key: "mail", header: t("list.mail"), cell: (row) => <MailReach {...row} /> },
				{
					key: "answered",
					header: t("list.answered"),
					cell: (row) => (row.answeredAt ? format.dayOf(row.answeredAt) : t("list.neverAnswered")),
				},
			]}
			empty={<EmptyState title={t("desk:growers.emptyTitle")}>{t("list.emptyBody")}</EmptyState>}
		/>
	);
}

function Name({ row: { operationId, name } }: { row: GrowerRow }) {
	const { t } = useTranslation("growers");
	return (
		<span className="flex items-start gap-2">
			<span className="no-print inline-flex min-h-6 min-w-6 items-center">
				<input
					type="checkbox"
					name="id"
					value={operationId}
					aria-label={t("choose.one", { name })}
					className="size-5 shrink-0 accent-damson"
				/>
			</span>
			<Link to={href("/desk/growers/:operationId", { operationId })} className="print-plain">
				{name}
			</Link>
		</span>
	);
}

import { useTranslation } from "react-i18next";
import { Link, useSearchParams } from "react-router";
import type { CallRow } from "#app/collect/calls.server.ts";
import { DataTable } from "#app/components/data-table.tsx";
import { EmptyState } from "#app/components/empty-state.tsx";
import { StatusBadge } from "#app/components/status-badge.tsx";
import { useFormat } from "#app/i18n/use-format.ts";
import { dispositionTones } from "../frame-table.tsx";
import { useGrowerName } from "../grower-name.ts";
import { NextTry, PhoneLink } from "./phone-link.tsx";

type CallTableProps = { rows: CallRow[]; caption: string; isFiltered: boolean };

/** Growers in the order in which their answers are worth most, each with a way to take the call. */
export function CallTable({ rows, caption, isFiltered }: CallTableProps) {
	const { t } = useTranslation("answered");
	const format = useFormat();
	const kind = isFiltered ? "noMatch" : "nobody";
	return (
		<DataTable
			caption={caption}
			captionHidden
			rows={rows}
			rowKey={(row) => row.operationId}
			columns={[
				{ key: "name", header: t("desk:growers.name"), cell: (row) => <Grower row={row} /> },
				{
					key: "county",
					header: t("common:areaKind.county"),
					cell: (row) => t("desk:growers.county", { county: row.countyName, state: row.statePostal }),
				},
				{
					key: "trees",
					header: t("desk:growers.trees"),
					numeric: true,
					cell: (row) => format.number(row.bearingTrees),
				},
				{
					key: "disposition",
					header: t("desk:responses.disposition"),
					cell: (row) => (
						<StatusBadge tone={dispositionTones[row.disposition]}>
							{t(`common:disposition.${row.disposition}`)}
						</StatusBadge>
					),
				},
				{ key: "last", header: t("calls.last"), cell: (row) => <LastContact row={row} /> },
				{ key: "worth", header: t("calls.worth"), cell: (row) => <Worth row={row} /> },
			]}
			empty={<EmptyState title={t(`calls.empty.${kind}Title`)}>{t(`calls.empty.${kind}Body`)}</EmptyState>}
		/>
	);
}

function Grower({ row }: { row: CallRow }) {
	const { t } = useTranslation("answered");
	const [search] = useSearchParams();
	const name = useGrowerName()(row.name);
	const next = new URLSearchParams(search);
	next.set("call", row.operationId);
	return (
		<>
			<Link to={`?${next}`} aria-label={t("calls.take", { name })} className="print-plain">
				{name}
			</Link>
			<span className="block text-xs text-quiet">{row.contactName}</span>
			<span className="block text-xs">
				<PhoneLink phone={row.phone} />
			</span>
		</>
	);
}

function LastContact({ row: { outcome, madeAt, note, timeZone, ...next } }: { row: CallRow }) {
	const { t } = useTranslation("answered");
	const format = useFormat();
	if (!outcome || !madeAt) return <span className="text-quiet">{t("calls.noContact")}</span>;
	return (
		<div className="min-w-40">
			{t(`growers:contact.outcomes.${outcome}`)}
			<span className="block text-xs text-quiet">{format.dayOf(madeAt, timeZone)}</span>
			{note && <span className="block max-w-60 text-xs">{note}</span>}
			<NextTry {...next} />
		</div>
	);
}

/** Why it is worth a call: how few have answered there, and what one more would do. */
function Worth({ row: { answeredHere, askedHere, share } }: { row: CallRow }) {
	const { t } = useTranslation("answered");
	const format = useFormat();
	return (
		<div className="min-w-36">
			{t("calls.answeredHere", { answered: format.number(answeredHere), asked: format.number(askedHere) })}
			{share > 0 && (
				<span className="block text-xs text-quiet">
					{t("calls.takesOff", { share: format.quantity(share * 100, "percent") })}
				</span>
			)}
		</div>
	);
}

import { useTranslation } from "react-i18next";
import { href, Link } from "react-router";
import { AnswerText } from "#app/components/answer-list.tsx";
import { type Column, DataTable } from "#app/components/data-table.tsx";
import { EmptyState } from "#app/components/empty-state.tsx";
import { StatusBadge } from "#app/components/status-badge.tsx";
import { useFormat } from "#app/i18n/use-format.ts";
import type { FindingsQuery } from "#app/review/findings.schema.ts";
import { useGrowerName } from "../grower-name.ts";
import { useAboutLabel } from "./about-label.ts";
import { useMovedWords, useToldWords } from "./finding-words.ts";
import type { QueueRow } from "./queue.server.ts";

type QueueTableProps = { rows: QueueRow[]; query: FindingsQuery; surveyId: string; season: number; isDraft: boolean };

/** Odd answers with what to ask, those first that move the figures most. */
export function QueueTable({ rows, query, surveyId, season, isDraft }: QueueTableProps) {
	const { t } = useTranslation("checks");
	const told = useToldWords();
	const empty = isDraft ? "draft" : isNarrowed(query) ? "noMatch" : query.show;
	const columns: Column<QueueRow>[] = [
		{
			key: "grower",
			header: t("desk:growers.name"),
			sortable: true,
			cell: (row) => <Grower row={row} surveyId={surveyId} canChoose={query.show === "open"} />,
		},
		{
			key: "county",
			header: t("common:areaKind.county"),
			sortable: true,
			cell: (row) => t("desk:growers.county", { county: row.countyName, state: row.statePostal }),
		},
		{
			key: "kind",
			header: t("queue.what"),
			sortable: true,
			cell: (row) => (
				<div className="min-w-56">
					<strong>{t(`kind.${row.checkKind}`)}</strong>
					<span className="block">{told(row.told, row.unit)}</span>
				</div>
			),
		},
		{ key: "answer", header: t("queue.answer"), cell: (row) => <Answers row={row} /> },
		{ key: "effect", header: t("queue.effect"), sortable: true, cell: (row) => <Effect row={row} season={season} /> },
		{ key: "state", header: t("queue.state"), cell: (row) => <FindingState finding={row} /> },
	];
	return (
		<DataTable
			caption={t(`queue.caption.${query.show}`)}
			captionHidden
			rows={rows}
			rowKey={(row) => row.findingId}
			sort={{ key: query.sort, direction: query.direction }}
			columns={columns}
			empty={<EmptyState title={t(`queue.empty.${empty}.title`)}>{t(`queue.empty.${empty}.body`)}</EmptyState>}
		/>
	);
}

function isNarrowed({ kind, crop, area, state }: FindingsQuery): boolean {
	return [kind, crop, area, state].some((one) => one !== "all");
}

type GrowerProps = { row: QueueRow; surveyId: string; canChoose: boolean };

/** Names the row and leads to the finding; the box chooses it for confirming several at once. */
function Grower({ row, surveyId, canChoose }: GrowerProps) {
	const { t } = useTranslation("checks");
	const name = useGrowerName()(row.operationName);
	const { findingId, cropKey, cultivar } = row;
	const crop = cropKey ? t(`common:crop.${cropKey}`) : "";
	return (
		<span className="flex items-start gap-2">
			{canChoose && (
				<label className="no-print relative inline-flex min-h-11 min-w-11 items-center justify-center">
					<input type="checkbox" name="chosen" value={findingId} className="size-5 accent-damson" />
					<span className="sr-only">{t("queue.choose", { name, kind: t(`kind.${row.checkKind}`) })}</span>
				</label>
			)}
			<span>
				<Link
					to={href("/desk/surveys/:surveyId/checks/:findingId", { surveyId, findingId })}
					className="print-plain inline-flex min-h-11 items-center"
				>
					{name}
				</Link>
				{crop && <span className="block text-xs text-quiet">{cultivar ? `${crop}: ${cultivar}` : crop}</span>}
			</span>
		</span>
	);
}

function Answers({ row: { shown } }: { row: QueueRow }) {
	const label = useAboutLabel();
	return (
		<ul className="min-w-40">
			{shown.map((about) => (
				<li key={about.at}>
					{/* A lone planting stands below the operation's name. */}
					<span className="text-quiet">{label(shown.length > 1 ? about : { ...about, planting: null })}:</span>{" "}
					<AnswerText shown={about.shown} />
				</li>
			))}
		</ul>
	);
}

function Effect({ row: { moved, measure, effect }, season }: { row: QueueRow; season: number }) {
	const { t } = useTranslation("checks");
	const format = useFormat();
	const words = useMovedWords();
	if (!moved || !measure) return <span className="text-quiet">{t("moved.nothing")}</span>;
	const told = words(moved, measure, season);
	return (
		<div className="min-w-40">
			<strong>{format.quantity(100 * (effect ?? 0), "percent", 1)}</strong>
			<span className="block text-xs text-quiet">
				{told.measure}: {told.change}
			</span>
		</div>
	);
}

type FindingStateProps = { finding: Pick<QueueRow, "outcome" | "askedAt" | "reply" | "told" | "closedBy"> };

/** Where a finding stands: what its grower said, or how it ended. */
export function FindingState({ finding: { outcome, askedAt, reply, told, closedBy } }: FindingStateProps) {
	const { t } = useTranslation("checks");
	if (outcome) {
		const byItself = outcome === "answer_changed" || outcome === "not_odd";
		return (
			<>
				<StatusBadge tone={byItself ? "neutral" : "good"}>{t(`outcome.${outcome}`)}</StatusBadge>
				{closedBy && <span className="block text-xs text-quiet">{closedBy}</span>}
			</>
		);
	}
	if (reply) return <StatusBadge tone={reply === "right" ? "good" : "attention"}>{t(`reply.${reply}`)}</StatusBadge>;
	if (askedAt) return <StatusBadge tone="neutral">{t("reply.waiting")}</StatusBadge>;
	if (told.confirmedByGrower) return <StatusBadge tone="neutral">{t("reply.onTheForm")}</StatusBadge>;
	return <StatusBadge tone="attention">{t("outcome.open")}</StatusBadge>;
}

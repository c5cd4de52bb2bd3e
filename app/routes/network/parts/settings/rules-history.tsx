import { useTranslation } from "react-i18next";
import { DataTable } from "#app/components/data-table.tsx";
import { EmptyState } from "#app/components/empty-state.tsx";
import { useFormat } from "#app/i18n/use-format.ts";
import { looseningOf, type RulesChange } from "#app/release/rules-change.ts";
import { useToldMove } from "./rule-words.ts";

/** Who changed which setting when, and from what to what. */
export function RulesHistory({ changes }: { changes: RulesChange[] }) {
	const { t } = useTranslation("network");
	const format = useFormat();
	return (
		<DataTable
			caption={t("settings.history")}
			captionHidden
			rows={changes}
			rowKey={(change) => String(change.networkRulesId)}
			columns={[
				{ key: "when", header: t("settings.when"), cell: (change) => format.moment(change.setAt) },
				{ key: "who", header: t("settings.who"), cell: (change) => change.setBy },
				{ key: "what", header: t("settings.what"), cell: (change) => <Moves change={change} /> },
			]}
			empty={<EmptyState title={t("settings.firstTitle")}>{t("settings.first")}</EmptyState>}
		/>
	);
}

function Moves({ change: { moves } }: { change: RulesChange }) {
	const { t } = useTranslation("network");
	const told = useToldMove();
	if (moves.length === 0) return <span className="text-quiet">{t("settings.nothingMoved")}</span>;
	const loosening = looseningOf(moves);
	return moves.map((move) => (
		<span key={move.name} className="block">
			{told(move)}
			{loosening.includes(move) && <span className="text-attention"> · {t("settings.showsMore")}</span>}
		</span>
	));
}

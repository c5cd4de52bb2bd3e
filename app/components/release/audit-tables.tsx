import { useTranslation } from "react-i18next";
import { DataTable } from "#app/components/data-table.tsx";
import { wordsIn } from "#app/i18n/language.ts";
import { useFormat } from "#app/i18n/use-format.ts";

type Widths = Record<"under1" | "from1to2" | "from2to5" | "from5", number>;
type Words = { en: string; es: string };
type Room = { quantity: string; label?: Words; narrowest: number | null; widths: Widths };
type Attacker = {
	kind: "everybody" | "owner" | "line" | "revision" | "other_survey";
	tried: number;
	failed: number;
};
export type AuditTablesProps = {
	audit: { narrowest: number | null; widths: Widths; byQuantity: Room[]; attackers: Attacker[] };
};

const classes = ["under1", "from1to2", "from2to5", "from5"] as const;

/** How much room is left to withheld figures, and who was tried: counts and multiples, no figure and no cell. */
export function AuditTables({ audit }: AuditTablesProps) {
	if (audit.attackers.length === 0) return null;
	return (
		<>
			<AttackerTable attackers={audit.attackers} />
			<RoomTable audit={audit} />
		</>
	);
}

function AttackerTable({ attackers }: { attackers: Attacker[] }) {
	const { t } = useTranslation("release");
	const format = useFormat();
	return (
		<DataTable
			caption={t("audit.attackers.caption")}
			rows={attackers}
			rowKey={({ kind }) => kind}
			columns={[
				{ key: "who", header: t("audit.attackers.who"), cell: ({ kind }) => t(`audit.attackers.${kind}`) },
				{
					key: "tried",
					header: t("audit.attackers.tried"),
					numeric: true,
					cell: ({ tried }) => format.number(tried),
				},
				{
					key: "found",
					header: t("audit.attackers.found"),
					numeric: true,
					cell: ({ failed }) => format.number(failed),
				},
			]}
		/>
	);
}

function RoomTable({ audit }: AuditTablesProps) {
	const { t, i18n } = useTranslation("release");
	const format = useFormat();
	const rows = [
		{ ...audit, key: "all", name: t("audit.room.all") },
		...audit.byQuantity.map((room) => ({
			...room,
			key: room.quantity,
			name: room.label ? wordsIn(room.label, i18n.language) : t("audit.room.respondents"),
		})),
	];
	return (
		<DataTable
			caption={t("audit.room.caption")}
			rows={rows}
			rowKey={({ key }) => key}
			columns={[
				{ key: "quantity", header: t("audit.room.quantity"), cell: ({ name }) => name },
				{
					key: "narrowest",
					header: t("audit.room.narrowest"),
					numeric: true,
					cell: ({ narrowest }) => (narrowest === null ? t("audit.room.free") : format.number(narrowest, 2)),
				},
				...classes.map((width) => ({
					key: width,
					header: t(`audit.room.${width}`),
					numeric: true,
					cell: ({ widths }: { widths: Widths }) => format.number(widths[width]),
				})),
			]}
		/>
	);
}

import { useTranslation } from "react-i18next";
import { Form } from "react-router";
import { Confirm } from "#app/components/confirm.tsx";
import { type Column, DataTable } from "#app/components/data-table.tsx";
import { EmptyState } from "#app/components/empty-state.tsx";
import { StatusBadge } from "#app/components/status-badge.tsx";
import { useFormat } from "#app/i18n/use-format.ts";

type Key = {
	apiKeyId: string;
	label: string;
	keyStart: string;
	scopes: string[];
	createdAt: Date;
	expiresAt: Date;
	revokedAt: Date | null;
	lastUsedAt: Date | null;
};

/** A researcher's own keys, by label and first letters, each with what became of it. */
export function KeyTable({ keys, now }: { keys: Key[]; now: Date }) {
	const { t } = useTranslation("dataroom");
	const format = useFormat();
	const stateOf = (key: Key) => (key.revokedAt ? "revoked" : key.expiresAt <= now ? "expired" : "valid");
	const columns: Column<Key>[] = [
		{
			key: "label",
			header: t("keys.label"),
			cell: ({ label, keyStart }) => (
				<>
					{label} <code className="text-quiet">{`${keyStart}…`}</code>
				</>
			),
		},
		{
			key: "state",
			header: t("keys.state"),
			cell: (key) => (
				<StatusBadge tone={stateOf(key) === "valid" ? "good" : "neutral"}>
					{t(`keys.states.${stateOf(key)}`)}
				</StatusBadge>
			),
		},
		{
			key: "scopes",
			header: t("keys.scopes"),
			// One a line: a name of one of them has an "and" of its own.
			cell: ({ scopes }) =>
				scopes.map((scope) => (
					<span key={scope} className="block">
						{t(`keys.scope.${scope}`)}
					</span>
				)),
		},
		{ key: "expires", header: t("keys.expires"), cell: ({ expiresAt }) => format.dayOf(expiresAt) },
		{
			key: "used",
			header: t("keys.lastUsed"),
			cell: ({ lastUsedAt }) => (lastUsedAt ? format.moment(lastUsedAt) : t("keys.never")),
		},
		{
			key: "end",
			header: t("keys.end"),
			cell: (key) =>
				stateOf(key) === "valid" && (
					<Form method="post">
						<Confirm
							trigger={t("keys.revoke", { label: key.label })}
							title={t("keys.revokeTitle", { label: key.label })}
							body={t("keys.revokeBody")}
							confirmLabel={t("keys.revokeConfirm")}
							name="apiKeyId"
							value={key.apiKeyId}
							danger
						/>
					</Form>
				),
		},
	];
	return (
		<DataTable
			caption={t("keys.caption")}
			columns={columns}
			rows={keys}
			rowKey={({ apiKeyId }) => apiKeyId}
			empty={<EmptyState title={t("keys.emptyTitle")}>{t("keys.emptyBody")}</EmptyState>}
		/>
	);
}

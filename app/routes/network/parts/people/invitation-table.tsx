import { useTranslation } from "react-i18next";
import { Form, href } from "react-router";
import type { InvitationState, ListedInvitation } from "#app/auth/invitations.server.ts";
import { Button, ButtonLink } from "#app/components/button.tsx";
import { Confirm } from "#app/components/confirm.tsx";
import { DataTable } from "#app/components/data-table.tsx";
import { EmptyState } from "#app/components/empty-state.tsx";
import { Section } from "#app/components/section.tsx";
import { StatusBadge } from "#app/components/status-badge.tsx";
import { useFormat } from "#app/i18n/use-format.ts";

const tones: Record<InvitationState, "neutral" | "good" | "attention" | "stop"> = {
	waiting: "neutral",
	sent: "attention",
	failed: "stop",
	expired: "stop",
	accepted: "good",
	withdrawn: "neutral",
};

/** Who was invited by mail, and what has become of it. */
export function InvitationTable({ invitations }: { invitations: ListedInvitation[] }) {
	const { t } = useTranslation("network");
	const inviteLink = <ButtonLink to={href("/network/invitations")}>{t("invitations.start")}</ButtonLink>;
	return (
		<Section title={t("invitations.listTitle")} actions={inviteLink}>
			<DataTable
				caption={t("invitations.listTitle")}
				captionHidden
				rows={invitations}
				rowKey={(invitation) => invitation.invitationId}
				columns={[
					{ key: "whom", header: t("invitations.email"), cell: (invitation) => <Whom invitation={invitation} /> },
					{ key: "state", header: t("invitations.state"), cell: (invitation) => <State invitation={invitation} /> },
					{ key: "act", header: t("invitations.acts"), cell: (invitation) => <Acts invitation={invitation} /> },
				]}
				empty={<EmptyState title={t("invitations.noneTitle")}>{t("invitations.noneBody")}</EmptyState>}
			/>
		</Section>
	);
}

type PartProps = { invitation: ListedInvitation };

function Whom({ invitation: { email, role, stateFips, endsOn } }: PartProps) {
	const { t } = useTranslation("network");
	const format = useFormat();
	const named = t(`common:role.${role}`);
	const states = format.list(stateFips.map((state) => t(`common:state.${state}`)));
	return (
		<>
			<span className="wrap-anywhere">{email}</span>
			<span className="block text-xs text-quiet">
				{stateFips.length > 0 ? t("people.roleIn", { role: named, state: states }) : named}
				{endsOn && ` · ${t("people.until", { day: format.day(endsOn) })}`}
			</span>
		</>
	);
}

function State({ invitation }: PartProps) {
	const { t } = useTranslation("network");
	const format = useFormat();
	const { state, invitedBy, invitedAt, expiresAt, acceptedBy, acceptedAt } = invitation;
	const open = state === "sent" || state === "waiting";
	return (
		<>
			<StatusBadge tone={tones[state]}>{t(`invitations.is.${state}`)}</StatusBadge>
			<span className="mt-1 block text-xs text-quiet">
				{t("invitations.by", { name: invitedBy, day: format.dayOf(invitedAt) })}
				{open && ` · ${t("invitations.opensUntil", { day: format.dayOf(expiresAt) })}`}
				{acceptedAt && ` · ${t("invitations.acceptedBy", { name: acceptedBy, day: format.dayOf(acceptedAt) })}`}
			</span>
		</>
	);
}

function Acts({ invitation: { invitationId, email, state } }: PartProps) {
	const { t } = useTranslation("network");
	if (state === "accepted" || state === "withdrawn") return null;
	return (
		<Form method="post" action={href("/network/invitations")} className="flex flex-wrap gap-2">
			<input type="hidden" name="invitationId" value={invitationId} />
			<Button name="step" value="again" kind="secondary" size="small" aria-label={t("invitations.againTo", { email })}>
				{t("invitations.again")}
			</Button>
			<Confirm
				trigger={t("invitations.withdraw")}
				title={t("invitations.withdrawTitle", { email })}
				body={t("invitations.withdrawBody")}
				confirmLabel={t("invitations.withdraw")}
				name="step"
				value="withdraw"
				danger
			/>
		</Form>
	);
}

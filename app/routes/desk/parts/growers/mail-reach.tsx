import { useTranslation } from "react-i18next";
import { StatusBadge } from "#app/components/status-badge.tsx";

type MailReachProps = { email: string | null; mailReturnedAt: Date | null; mailWanted: boolean };

/** Whether mail about surveys gets there, and why not. */
export function MailReach({ email, mailReturnedAt, mailWanted }: MailReachProps) {
	const { t } = useTranslation("growers");
	if (!email) return <StatusBadge tone="attention">{t("mail.none")}</StatusBadge>;
	if (mailReturnedAt) return <StatusBadge tone="stop">{t("mail.returned")}</StatusBadge>;
	if (!mailWanted) return <StatusBadge tone="neutral">{t("mail.stopped")}</StatusBadge>;
	return <StatusBadge tone="good">{t("mail.reachable")}</StatusBadge>;
}

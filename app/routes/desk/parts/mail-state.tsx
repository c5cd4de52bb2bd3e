import { useTranslation } from "react-i18next";
import type { Mail } from "#app/collect/mail-list.server.ts";
import { useFormat } from "#app/i18n/use-format.ts";

/** How one mail stands: on its way, sent on a day, or why it was given up. */
export function MailState({ mail, timeZone }: { mail: Mail; timeZone: string }) {
	const { t } = useTranslation("desk");
	const format = useFormat();
	if (mail.failure)
		return (
			<span className="text-attention">
				{t(`mail.${mail.kind}.failed`, { why: t(`mail_failure.${mail.failure}`) })}
			</span>
		);
	if (!mail.sentAt) return t(`mail.${mail.kind}.waiting`);
	return t(`mail.${mail.kind}.sent`, { day: format.dayOf(mail.sentAt, timeZone) });
}

import { useTranslation } from "react-i18next";
import { StatusBadge } from "#app/components/status-badge.tsx";
import { useFormat } from "#app/i18n/use-format.ts";

/** A number that a telephone can ring. */
export function PhoneLink({ phone }: { phone: string | null }) {
	const { t } = useTranslation("desk");
	if (!phone) return <span className="text-quiet">{t("grower.noPhone")}</span>;
	return (
		<a href={`tel:${phone.replace(/[^\d+]/g, "")}`} className="print-plain">
			{phone}
		</a>
	);
}

/** When a grower is to be tried again, marked where that is now. */
export function NextTry({ nextOn, nextTime, due }: { nextOn: string | null; nextTime: string | null; due: boolean }) {
	const { t } = useTranslation("answered");
	const format = useFormat();
	if (!nextOn) return null;
	const day = format.day(nextOn);
	const words = nextTime ? t("calls.nextAt", { day, time: nextTime }) : t("calls.next", { day });
	if (!due) return <span className="block text-xs">{words}</span>;
	return (
		<span className="block">
			<StatusBadge tone="attention">{words}</StatusBadge>
		</span>
	);
}

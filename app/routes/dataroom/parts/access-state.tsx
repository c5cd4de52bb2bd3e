import { useTranslation } from "react-i18next";
import { href } from "react-router";
import type { AccessState as Asked } from "#app/auth/research-access.server.ts";
import type { Term } from "#app/auth/research-term.server.ts";
import { ButtonLink } from "#app/components/button.tsx";
import { Notice } from "#app/components/notice.tsx";
import { useFormat } from "#app/i18n/use-format.ts";

/** How a researcher's access stands: until when it lasts, what became of the last request, and where to ask. */
export function AccessState({ term, request }: { term: Term | null; request: Asked }) {
	const { t } = useTranslation("dataroom");
	const format = useFormat();
	const lastDay = term?.lastDay ? format.day(term.lastDay) : null;
	if (term && !term.renewable) return lastDay && <p className="mb-5">{t("home.until", { day: lastDay })}</p>;
	const ask = <ButtonLink to={href("/dataroom/access")}>{t(term ? "home.askAgain" : "home.ask")}</ButtonLink>;
	const standing = lastDay && (
		<p className="mb-3">{t(term?.holds ? "home.until" : "home.endedOn", { day: lastDay })}</p>
	);
	if (request && !request.decision)
		return (
			<Notice tone="info" title={t("home.waitingTitle")}>
				{standing}
				<p>{t(term ? "home.waitingAgain" : "home.waitingBody", { day: format.dayOf(request.requestedAt) })}</p>
			</Notice>
		);
	if (request?.decision === "declined")
		return (
			<Notice tone="attention" title={t("home.declinedTitle")}>
				<p className="mb-3">{request.decisionReason}</p>
				{standing}
				{ask}
			</Notice>
		);
	if (term)
		return (
			<Notice tone="attention" title={t(term.holds ? "home.endsTitle" : "home.endedTitle", { day: lastDay })}>
				<p className="mb-3">
					{t(term.holds ? "home.endsBody" : "home.endedBody")} {request && t("home.filledIn")}
				</p>
				{ask}
			</Notice>
		);
	return (
		<Notice tone="info" title={t("home.noRequestTitle")}>
			<p className="mb-3">{t("home.noRequestBody")}</p>
			{ask}
		</Notice>
	);
}

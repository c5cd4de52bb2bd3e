import { useTranslation } from "react-i18next";
import { NotDone } from "#app/components/notice.tsx";
import type { NotChanged } from "./form-access.server.ts";

/** Why a change was not made; what was typed stands below. */
export function NotChangedNotice({ answer }: { answer: { refused: NotChanged | null } | undefined }) {
	const { t } = useTranslation("forms");
	const why = answer?.refused;
	if (!why) return null;
	return (
		<NotDone answer={answer} tone="attention" title={t(`notChanged.${why}.title`)}>
			{t(`notChanged.${why}.body`)}
		</NotDone>
	);
}

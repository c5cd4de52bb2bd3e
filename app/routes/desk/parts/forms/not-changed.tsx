import { useTranslation } from "react-i18next";
import { Notice } from "#app/components/notice.tsx";
import type { NotChanged } from "./form-access.server.ts";

/** Why a change was not made; what was typed stands below. */
export function NotChangedNotice({ why }: { why: NotChanged | undefined }) {
	const { t } = useTranslation("forms");
	if (!why) return null;
	return (
		<div role="alert">
			<Notice tone="attention" title={t(`notChanged.${why}.title`)}>
				{t(`notChanged.${why}.body`)}
			</Notice>
		</div>
	);
}

import { useTranslation } from "react-i18next";
import { href, Link } from "react-router";
import { Notice } from "#app/components/notice.tsx";

type MergedNoticeProps = { operation: { mergedInto: string | null; merged: { operationId: string; name: string }[] } };

/** Leads from a duplicate to the grower that stays, and from there to those that were merged into it and their answers. */
export function MergedNotice({ operation: { mergedInto, merged } }: MergedNoticeProps) {
	const { t } = useTranslation("growers");
	if (mergedInto)
		return (
			<Notice tone="attention" title={t("merge.isDropped")}>
				<Link to={href("/desk/growers/:operationId", { operationId: mergedInto })}>{t("merge.toKept")}</Link>
			</Notice>
		);
	if (merged.length === 0) return null;
	return (
		<Notice tone="info" title={t("merge.holds")}>
			<ul>
				{merged.map(({ operationId, name }) => (
					<li key={operationId}>
						<Link to={href("/desk/growers/:operationId", { operationId })}>{name}</Link>
					</li>
				))}
			</ul>
		</Notice>
	);
}

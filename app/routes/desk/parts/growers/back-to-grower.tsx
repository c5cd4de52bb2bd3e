import { useTranslation } from "react-i18next";
import { href, Link } from "react-router";

/** The way back from a page about one grower's plantings. */
export function BackToGrower({ operationId }: { operationId: string }) {
	const { t } = useTranslation("growers");
	return (
		<p className="no-print mb-4">
			<Link to={href("/desk/growers/:operationId", { operationId })}>{t("edit.back")}</Link>
		</p>
	);
}

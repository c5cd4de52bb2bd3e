import type { ReactNode } from "react";
import { useTranslation } from "react-i18next";
import { href, Link } from "react-router";

/** The way back from a page about one operation to all of them. */
export function BackToOrchard() {
	const { t } = useTranslation("orchard");
	return <Back to={href("/orchard")}>{t("back")}</Back>;
}

export function BackToPlantings({ operationId }: { operationId: string }) {
	const { t } = useTranslation("orchard");
	return <Back to={href("/orchard/:operationId/plantings", { operationId })}>{t("plantings.back")}</Back>;
}

function Back({ to, children }: { to: string; children: ReactNode }) {
	return (
		<p className="no-print mb-6">
			<Link to={to} className="inline-flex min-h-11 items-center">
				{children}
			</Link>
		</p>
	);
}

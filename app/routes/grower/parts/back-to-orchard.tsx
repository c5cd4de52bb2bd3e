import { useTranslation } from "react-i18next";
import { href, Link } from "react-router";

/** The way back from a page about one operation to all of them. */
export function BackToOrchard() {
	const { t } = useTranslation("orchard");
	return (
		<p className="no-print mb-6">
			<Link to={href("/orchard")} className="inline-flex min-h-11 items-center">
				{t("back")}
			</Link>
		</p>
	);
}

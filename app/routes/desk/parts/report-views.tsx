import { useTranslation } from "react-i18next";
import { Link } from "react-router";

type ReportViewsProps = { address: string; preview: boolean };

/** Writing and preview of one report. They differ by a search word only, which a path's tabs cannot tell apart. */
export function ReportViews({ address, preview }: ReportViewsProps) {
	const { t } = useTranslation("public");
	const views = [
		{ to: address, label: t("report_editor.edit"), current: !preview },
		{ to: `${address}?view=preview`, label: t("report_editor.preview"), current: preview },
	];
	return (
		<nav aria-label={t("report_editor.views")} className="mb-6 border-b border-line">
			<ul className="flex flex-wrap gap-x-1">
				{views.map(({ to, label, current }) => (
					<li key={to}>
						<Link
							to={to}
							aria-current={current ? "page" : undefined}
							className="-mb-px inline-flex min-h-11 items-center border border-transparent px-4 text-ink no-underline hover:bg-sheet aria-[current=page]:border-line aria-[current=page]:border-b-paper aria-[current=page]:bg-paper aria-[current=page]:font-bold aria-[current=page]:text-damson"
						>
							{label}
						</Link>
					</li>
				))}
			</ul>
		</nav>
	);
}

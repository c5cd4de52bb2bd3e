import type { ReactNode } from "react";
import { useTranslation } from "react-i18next";
import { useActionData } from "react-router";
import { classes } from "./classes.ts";

type PageProps = {
	title: string;
	lead?: ReactNode;
	actions?: ReactNode;
	width?: "narrow" | "wide";
	children?: ReactNode;
};

/** A page's frame: its title in the tab and as the one h1. The tab says first when something sent needs mending. */
export function Page({ title, lead, actions, width = "wide", children }: PageProps) {
	const { t } = useTranslation();
	const sent = useActionData<{ problems?: unknown[] }>();
	const prefix = sent?.problems?.length ? t("summary.titlePrefix") : "";
	return (
		<div className={classes("pb-16 pt-8", width === "narrow" && "max-w-(--width-narrow)")}>
			<title>{`${prefix}${title} – ${t("app.name")}`}</title>
			<header className="mb-8 flex flex-wrap items-end justify-between gap-x-8 gap-y-4">
				<div className="max-w-3xl min-w-0 wrap-anywhere">
					<h1 className="text-2xl sm:text-3xl">{title}</h1>
					{lead && <div className="mt-3 text-lg text-quiet">{lead}</div>}
				</div>
				{actions && <div className="no-print flex flex-wrap gap-3">{actions}</div>}
			</header>
			{children}
		</div>
	);
}

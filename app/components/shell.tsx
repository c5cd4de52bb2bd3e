import type { ReactNode } from "react";
import { useTranslation } from "react-i18next";
import { classes } from "./classes.ts";
import { DemoBanner } from "./demo-banner.tsx";
import { HeldNotice } from "./held-notice.tsx";
import { useShellData } from "./shell-data.ts";
import { SiteFooter } from "./site-footer.tsx";
import { SiteHeader } from "./site-header.tsx";
import { Toast } from "./toast.tsx";

type SheetProps = { header: ReactNode; footer: ReactNode; width?: "narrow" | "wide"; children: ReactNode };

/** The sheet of paper that every page is written on, and where its content starts. */
export function Sheet({ header, footer, width = "wide", children }: SheetProps) {
	const { t } = useTranslation();
	const shell = useShellData();
	return (
		<div
			className={classes(
				"mx-auto flex min-h-screen flex-col border-rule bg-paper",
				width === "wide" ? "max-w-(--width-sheet) xl:border-x" : "max-w-(--width-narrow) text-lg md:border-x",
			)}
		>
			<a
				href="#content"
				className="sr-only bg-ink px-4 text-paper focus:not-sr-only focus:absolute focus:z-50 focus:m-2 focus:inline-flex focus:min-h-11 focus:items-center"
			>
				{t("nav.skip")}
			</a>
			<DemoBanner />
			{header}
			<Toast toast={shell?.toast ?? null} />
			<main id="content" tabIndex={-1} className="px-gutter">
				<HeldNotice />
				{children}
			</main>
			{footer}
		</div>
	);
}

type ShellProps = { children: ReactNode; below?: ReactNode };

/** The frame of everything but a grower's survey; `below` is an area's own navigation. */
export function Shell({ children, below }: ShellProps) {
	return (
		<Sheet
			header={
				<>
					<SiteHeader />
					{below}
				</>
			}
			footer={<SiteFooter />}
		>
			{children}
		</Sheet>
	);
}

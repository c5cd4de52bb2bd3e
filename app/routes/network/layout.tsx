import type { ReactNode } from "react";
import { useTranslation } from "react-i18next";
import { Outlet } from "react-router";
import type { Route } from "./+types/layout";
import { networkGuard, requireCoordinator } from "#app/auth/guard.server.ts";
import { AreaNav } from "#app/components/area-nav.tsx";
import { RefusalPage } from "#app/components/refusal-page.tsx";
import { Shell } from "#app/components/shell.tsx";

export const middleware: Route.MiddlewareFunction[] = [networkGuard];

/** Without a loader here a client navigation would pass no guard. */
export function loader({ context }: Route.LoaderArgs) {
	requireCoordinator(context);
	return null;
}

export default function NetworkLayout() {
	return (
		<NetworkFrame>
			<Outlet />
		</NetworkFrame>
	);
}

export function ErrorBoundary({ error }: Route.ErrorBoundaryProps) {
	return (
		<NetworkFrame>
			<RefusalPage error={error} />
		</NetworkFrame>
	);
}

function NetworkFrame({ children }: { children: ReactNode }) {
	const { t } = useTranslation();
	const below = (
		<AreaNav
			label={t("nav.networkLabel")}
			items={[
				{ to: "/network", label: t("nav.people"), end: true },
				{ to: "/network/releases", label: t("nav.releases") },
				{ to: "/network/reports", label: t("nav.reports") },
				{ to: "/network/states", label: t("nav.states") },
				{ to: "/network/access", label: t("nav.access") },
				{ to: "/network/impact", label: t("nav.impact") },
				{ to: "/network/settings", label: t("nav.settings") },
				{ to: "/network/log", label: t("nav.log") },
			]}
		/>
	);
	return <Shell below={below}>{children}</Shell>;
}

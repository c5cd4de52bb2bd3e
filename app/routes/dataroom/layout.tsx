import { useTranslation } from "react-i18next";
import { Outlet } from "react-router";
import type { Route } from "./+types/layout";
import { dataroomGuard, requirePerson } from "#app/auth/guard.server.ts";
import { RefusalPage } from "#app/components/refusal-page.tsx";
import { Tabs } from "#app/components/tabs.tsx";

export const middleware: Route.MiddlewareFunction[] = [dataroomGuard];

/** Without a loader here a client navigation would pass no guard. */
export function loader({ context }: Route.LoaderArgs) {
	requirePerson(context);
	return null;
}

/** Inside the public site's frame: the data room shows what anyone can see, in better shape. */
export default function DataroomLayout() {
	return (
		<>
			<DataroomTabs />
			<Outlet />
		</>
	);
}

export function ErrorBoundary({ error }: Route.ErrorBoundaryProps) {
	return (
		<>
			<DataroomTabs />
			<RefusalPage error={error} />
		</>
	);
}

function DataroomTabs() {
	const { t } = useTranslation();
	return (
		<div className="mt-6">
			<Tabs
				label={t("nav.dataroomLabel")}
				items={[
					{ to: "/dataroom", label: t("nav.files"), end: true },
					{ to: "/dataroom/tables", label: t("nav.tables") },
					{ to: "/dataroom/keys", label: t("nav.keys") },
					{ to: "/dataroom/access", label: t("nav.askAccess") },
				]}
			/>
		</div>
	);
}

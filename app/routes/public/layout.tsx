import { Outlet } from "react-router";
import type { Route } from "./+types/layout";
import { RefusalPage } from "#app/components/refusal-page.tsx";
import { Shell } from "#app/components/shell.tsx";

export default function PublicLayout() {
	return (
		<Shell>
			<Outlet />
		</Shell>
	);
}

export function ErrorBoundary({ error }: Route.ErrorBoundaryProps) {
	return (
		<Shell>
			<RefusalPage error={error} />
		</Shell>
	);
}

import { Outlet } from "react-router";
import { orchardGuard, requireOrchard } from "#app/auth/guard.server.ts";
import type { Route } from "./+types/orchard-layout";

export const middleware: Route.MiddlewareFunction[] = [orchardGuard];

/** Makes data requests of the pages below pass the guard too. */
export function loader({ context }: Route.LoaderArgs) {
	requireOrchard(context);
	return null;
}

export default function OrchardLayout() {
	return <Outlet />;
}

import "@fontsource/noto-sans/400.css";
import "@fontsource/noto-sans/700.css";
import "./app.css";
import type { ReactNode } from "react";
import { useTranslation } from "react-i18next";
import { Links, Meta, Outlet, Scripts, ScrollRestoration } from "react-router";
import type { Route } from "./+types/root";
import { sessionContext, sessionMiddleware } from "#app/auth/session.server.ts";
import { visitorContext, visitorMiddleware } from "#app/auth/visitor.server.ts";
import { getLanguage, i18nextMiddleware } from "#app/i18n/middleware.server.ts";
import { env } from "#app/lib/env.server.ts";
import { securityHeaders } from "#app/lib/security-headers.server.ts";

export const middleware: Route.MiddlewareFunction[] = [
	securityHeaders,
	i18nextMiddleware,
	sessionMiddleware,
	visitorMiddleware,
];

export function loader({ context }: Route.LoaderArgs) {
	const { person, grants } = context.get(visitorContext);
	return {
		language: getLanguage(context),
		demo: env().DEMO,
		toast: context.get(sessionContext).get("toast") ?? null,
		// Only what the navigation needs: a name and which areas to offer.
		visitor: person && {
			displayName: person.displayName,
			areas: {
				desk: grants.stateFips.length > 0,
				network: grants.coordinator,
				orchard: grants.operationIds.length > 0,
				dataroom: true,
			},
		},
	};
}

export function Layout({ children }: { children: ReactNode }) {
	const { i18n } = useTranslation();
	return (
		<html lang={i18n.language}>
			<head>
				<meta charSet="utf-8" />
				<meta name="viewport" content="width=device-width, initial-scale=1" />
				<Meta />
				<Links />
			</head>
			<body>
				{children}
				<ScrollRestoration />
				<Scripts />
			</body>
		</html>
	);
}

export default function App() {
	return <Outlet />;
}

import "./app.css";
import type { ReactNode } from "react";
import { useTranslation } from "react-i18next";
import { Links, Meta, Outlet, Scripts, ScrollRestoration, useMatches } from "react-router";
import type { Route } from "./+types/root";
import { holderOf } from "#app/auth/holder.server.ts";
import { sessionContext, sessionMiddleware } from "#app/auth/session.server.ts";
import { surveyInHandMiddleware } from "#app/auth/survey-in-hand.server.ts";
import { visitorContext, visitorMiddleware } from "#app/auth/visitor.server.ts";
import { RefusalPage } from "#app/components/refusal-page.tsx";
import { type ShellData, useDemo, useShellData } from "#app/components/shell-data.ts";
import { Shell } from "#app/components/shell.tsx";
import { useFocusKept } from "#app/components/use-focus-kept.ts";
import { getInstance, getLanguage, i18nextMiddleware } from "#app/i18n/middleware.server.ts";
import { env } from "#app/lib/env.server.ts";
import { pageMethods } from "#app/lib/page-methods.server.ts";
import { securityHeaders } from "#app/lib/security-headers.server.ts";

export const middleware: Route.MiddlewareFunction[] = [
	securityHeaders,
	i18nextMiddleware,
	// A guard refuses before any loader runs, and that page too must say that it is a demonstration.
	({ context }, next) => {
		Object.assign(getInstance(context).options, { demo: env().DEMO });
		return next();
	},
	...pageMethods,
	surveyInHandMiddleware,
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
			holder: holderOf("person", person.personId),
			areas: {
				desk: grants.stateFips.length > 0,
				network: grants.coordinator,
				orchard: grants.operationIds.length > 0,
				dataroom: true,
			},
		},
	} satisfies ShellData;
}

export const links: Route.LinksFunction = () => [{ rel: "icon", href: "/favicon.svg", type: "image/svg+xml" }];

export function Layout({ children }: { children: ReactNode }) {
	const { i18n } = useTranslation();
	const demo = useDemo();
	const shell = useShellData();
	const told = shell?.toast;
	// What was just told can be closed, which takes scripts.
	const isBare = useMatches().some(({ handle }) => (handle as { bare?: boolean } | undefined)?.bare) && !told;
	return (
		<html
			lang={i18n.language}
			dir={i18n.dir()}
			data-demo={demo ? "yes" : undefined}
			data-holder={shell?.visitor?.holder}
		>
			<head>
				<meta charSet="utf-8" />
				<meta name="viewport" content="width=device-width, initial-scale=1" />
				<meta name="color-scheme" content="light dark" />
				<meta name="theme-color" content="#ffffff" media="(prefers-color-scheme: light)" />
				<meta name="theme-color" content="#141b18" media="(prefers-color-scheme: dark)" />
				<Meta />
				<Links />
			</head>
			<body className="ruled">
				{children}
				{/* Pages that say so go by forms and links alone, where every kilobyte is waited for. */}
				{!isBare && <ScrollRestoration />}
				{!isBare && <Scripts />}
			</body>
		</html>
	);
}

export default function App() {
	useFocusKept();
	return <Outlet />;
}

/** For whatever a layout does not catch, guards' refusals among it: these come before any loader has run. */
export function ErrorBoundary({ error }: Route.ErrorBoundaryProps) {
	return (
		<Shell>
			<RefusalPage error={error} />
		</Shell>
	);
}

import { useTranslation } from "react-i18next";
import { Link, NavLink, useLocation } from "react-router";
import { LanguageSwitch } from "./language-switch.tsx";
import { Mark } from "./mark.tsx";
import { useShellData } from "./shell-data.ts";

const publicPages = [
	{ to: "/map", key: "nav.map" },
	{ to: "/reports", key: "nav.reports" },
	{ to: "/methods", key: "nav.methods" },
	{ to: "/data", key: "nav.data" },
];
const areas = [
	{ area: "desk", to: "/desk", key: "nav.desk" },
	{ area: "network", to: "/network", key: "nav.network" },
	{ area: "orchard", to: "/orchard", key: "nav.orchard" },
	{ area: "dataroom", to: "/dataroom", key: "nav.dataroom" },
] as const;

const linkLook =
	"inline-flex min-h-11 items-center border-b-3 border-transparent px-2.5 text-ink no-underline hover:border-rule aria-[current=page]:border-damson aria-[current=page]:font-bold";

/** Mark, name and ways on: what anyone may read, then what this visitor may work in. */
export function SiteHeader() {
	const { t } = useTranslation();
	const visitor = useShellData()?.visitor;
	const granted = areas.filter(({ area }) => visitor?.areas[area]);
	return (
		<header className="double-rule no-print px-gutter pt-2">
			<div className="flex flex-wrap items-center justify-between gap-x-4">
				<Brand />
				<div className="flex flex-wrap items-center justify-end gap-x-1 text-sm">
					<LanguageSwitch />
					<Account />
				</div>
			</div>
			<nav aria-label={t("nav.main")}>
				<ul className="-mx-2.5 flex flex-wrap items-center">
					{publicPages.map(({ to, key }) => (
						<li key={to}>
							<NavLink to={to} className={linkLook}>
								{t(key)}
							</NavLink>
						</li>
					))}
					{granted.map(({ to, key }, index) => (
						<li key={to} className={index === 0 ? "sm:ml-3 sm:border-l sm:border-rule sm:pl-3" : undefined}>
							<NavLink to={to} className={linkLook}>
								{t(key)}
							</NavLink>
						</li>
					))}
				</ul>
			</nav>
		</header>
	);
}

export function Brand() {
	const { t } = useTranslation();
	return (
		<Link to="/" aria-label={t("app.home")} className="inline-flex min-h-11 items-center gap-2 text-ink no-underline">
			<Mark className="size-9" />
			<span className="text-xl font-bold tracking-tight">{t("app.name")}</span>
		</Link>
	);
}

function Account() {
	const { t } = useTranslation();
	const { pathname, search } = useLocation();
	const shell = useShellData();
	if (!shell) return null;
	if (!shell.visitor) {
		if (pathname.startsWith("/sign-in")) return null;
		return (
			<Link
				to={pathname === "/" ? "/sign-in" : `/sign-in?next=${encodeURIComponent(pathname + search)}`}
				className="inline-flex min-h-11 items-center px-2"
			>
				{t("nav.signIn")}
			</Link>
		);
	}
	return <SignedIn />;
}

/** Who is signed in, and the way out; nothing for anybody else. */
export function SignedIn() {
	const { t } = useTranslation();
	const visitor = useShellData()?.visitor;
	if (!visitor) return null;
	return (
		<>
			<Link to="/me" className="inline-flex min-h-11 max-w-48 items-center px-2 text-ink">
				<span className="truncate">{visitor.displayName}</span>
			</Link>
			<form method="post" action="/sign-out">
				<button className="min-h-11 px-2 text-damson underline underline-offset-4 hover:decoration-2">
					{t("nav.signOut")}
				</button>
			</form>
		</>
	);
}

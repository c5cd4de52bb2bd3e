import { useTranslation } from "react-i18next";
import { Link } from "react-router";
import { helpContact } from "#app/lib/help-contact.ts";

const links = [
	{ to: "/about", key: "footer.about" },
	{ to: "/calendar", key: "footer.calendar" },
	{ to: "/methods", key: "footer.methods" },
	{ to: "/privacy", key: "footer.privacy" },
	{ to: "/accessibility", key: "footer.accessibility" },
	{ to: "/api", key: "footer.api" },
] as const;

/** The same on every page: what is promised, how figures are made, whom to ask. */
export function SiteFooter() {
	const { t } = useTranslation();
	return (
		<footer className="mt-auto border-t border-line px-gutter py-6 text-sm print:hidden">
			<p className="max-w-prose text-quiet">{t("footer.published")}</p>
			<nav aria-label={t("nav.footer")} className="mt-2">
				<ul className="flex flex-wrap gap-x-6">
					{links.map(({ to, key }) => (
						<li key={to}>
							<FooterLink to={to}>{t(key)}</FooterLink>
						</li>
					))}
				</ul>
			</nav>
			<HelpLine />
		</footer>
	);
}

function FooterLink({ to, children }: { to: string; children: string }) {
	return (
		<Link to={to} className="inline-flex min-h-9 items-center">
			{children}
		</Link>
	);
}

/** Whom to turn to. Links keep their own words, so a whole sentence is put around them. */
export function HelpLine() {
	const { t } = useTranslation();
	return (
		<p className="mt-1">
			{t("footer.help")}{" "}
			<a href={`mailto:${helpContact.email}`} className="inline-block py-1">
				{helpContact.email}
			</a>{" "}
			·{" "}
			<a href={helpContact.phoneUri} className="inline-block py-1">
				{helpContact.phone}
			</a>
		</p>
	);
}

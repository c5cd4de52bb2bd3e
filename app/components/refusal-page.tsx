import { useTranslation } from "react-i18next";
import { isRouteErrorResponse, Link, useLocation } from "react-router";
import { helpContact } from "#app/lib/help-contact.ts";
import { isRefusal, type Refusal, type RefusalCode } from "#app/lib/refusal.ts";
import { Button, ButtonLink } from "./button.tsx";
import { type HeldAs, HeldForm } from "./held-notice.tsx";
import { Page } from "./page.tsx";

type ErrorCode = RefusalCode | "unexpected";

const heldAs: Partial<Record<ErrorCode, HeldAs>> = { other_person: "other", link_session_over: "link" };

/** Why a page cannot be shown, in the reader's words, and what to do next. */
export function RefusalPage({ error }: { error: unknown }) {
	const { t } = useTranslation();
	const { code, role, posted } = readError(error);
	if (posted) return <HeldForm why={heldAs[code] ?? "over"} posted={posted} />;
	const values = { email: helpContact.email, role: role ? t(`role.needed.${role}`) : "" };
	return (
		<Page title={t(`error.${code}.title`)} width="narrow" lead={t(`error.${code}.body`, values)}>
			<NextSteps code={code} />
		</Page>
	);
}

/** The refusal in what was thrown; other answers by status; all else is a bug, told as one calm sentence. */
export function readError(error: unknown): Omit<Refusal, "code"> & { code: ErrorCode } {
	if (!isRouteErrorResponse(error)) return { code: "unexpected" };
	if (isRefusal(error.data)) return error.data;
	const byStatus: Record<number, RefusalCode> = {
		400: "form_not_understood",
		401: "sign_in_needed",
		404: "page_not_found",
		405: "method_not_allowed",
		413: "too_much_text",
		429: "too_many_tries",
		503: "service_away",
	};
	return { code: byStatus[error.status] ?? "unexpected" };
}

function NextSteps({ code }: { code: ErrorCode }) {
	const { t } = useTranslation();
	const { pathname, search } = useLocation();
	const here = pathname + search;
	switch (code) {
		case "sign_in_needed":
			return <ButtonLink to={`/sign-in?next=${encodeURIComponent(here)}`}>{t("nav.signIn")}</ButtonLink>;
		case "role_needed":
			return (
				<form method="post" action="/sign-out" className="flex flex-wrap gap-3">
					<input type="hidden" name="next" value={`/sign-in?next=${encodeURIComponent(here)}`} />
					<ButtonLink to="/me">{t("error.whatNext")}</ButtonLink>
					<Button kind="secondary">{t("error.otherAccount")}</Button>
				</form>
			);
		case "page_not_found":
			return <StartingPoints />;
		case "service_away":
		case "too_many_tries":
		case "unexpected":
			return (
				<div className="flex flex-wrap gap-3">
					<ButtonLink to={here} reloadDocument>
						{t("error.tryAgain")}
					</ButtonLink>
					<ButtonLink to="/" kind="quiet" reloadDocument>
						{t("error.goHome")}
					</ButtonLink>
				</div>
			);
		default:
			return null;
	}
}

function StartingPoints() {
	const { t } = useTranslation();
	const pages = [
		{ to: "/", label: t("error.goHome") },
		{ to: "/map", label: t("nav.map") },
		{ to: "/reports", label: t("nav.reports") },
		{ to: "/methods", label: t("nav.methods") },
		{ to: "/data", label: t("nav.data") },
	];
	return (
		<ul className="border-t border-rule">
			{pages.map(({ to, label }) => (
				<li key={to} className="border-b border-rule">
					<Link to={to} className="flex min-h-11 items-center">
						{label}
					</Link>
				</li>
			))}
		</ul>
	);
}

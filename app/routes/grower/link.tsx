import { useTranslation } from "react-i18next";
import { Form, href, redirect } from "react-router";
import type { Route } from "./+types/link";
import { countWrongLink } from "#app/auth/link-tries.server.ts";
import { scopedTransaction } from "#app/auth/scope.server.ts";
import { sessionContext } from "#app/auth/session.server.ts";
import { findLink, markOpened, partOf } from "#app/collect/personal-link.server.ts";
import { Button } from "#app/components/button.tsx";
import { DescriptionList } from "#app/components/description-list.tsx";
import { Page } from "#app/components/page.tsx";
import { type Language, wordsIn } from "#app/i18n/language.ts";
import { getLanguage, languageCookie } from "#app/i18n/middleware.server.ts";
import { refusal } from "#app/lib/refusal.ts";

export const handle = { bare: true };

/** Looks only, for mail scanners open links too; a forwarded link shows no whole name. */
export async function loader({ context, params, request }: Route.LoaderArgs) {
	const link = await scopedTransaction({ kind: "network" }, (trx) => findLink(trx, params.token));
	if (!link) throw await refused(request);
	await readInOwnLanguage(context, request, link.language);
	return { title: link.title, season: link.season, operation: partOf(link.operationName), county: link.countyName };
}

/**
 * The directory knows which language this grower reads, until the visitor says otherwise: a phone is often set to
 * another. Once only, so that a browser that keeps no cookies still gets the page.
 */
async function readInOwnLanguage(context: Route.LoaderArgs["context"], request: Request, language: Language) {
	const { pathname, searchParams } = new URL(request.url);
	if (language === getLanguage(context) || searchParams.has("language")) return;
	if (await languageCookie.parse(request.headers.get("cookie"))) return;
	throw redirect(`${pathname}?language=${language}`, {
		headers: { "set-cookie": await languageCookie.serialize(language) },
	});
}

/** One answer for every link that opens nothing, until somebody has tried too many of them. */
async function refused(request: Request) {
	return refusal((await countWrongLink(request)) ? "link_not_valid" : "too_many_tries");
}

/** The button trades the token for a session, and the browser goes on to an address that does not hold it. */
export async function action({ context, params, request }: Route.ActionArgs) {
	const link = await scopedTransaction({ kind: "network" }, async (trx) => {
		const found = await findLink(trx, params.token);
		if (found) await markOpened(trx, found.personalLinkId);
		return found;
	});
	if (!link) throw await refused(request);
	context.get(sessionContext).set("personalLinkId", link.personalLinkId);
	const { surveyId, operationId } = link;
	return redirect(href("/answer/:surveyId/:operationId", { surveyId, operationId }), 303);
}

export default function LinkPage({ loaderData }: Route.ComponentProps) {
	const { t, i18n } = useTranslation("grower");
	const { title, season, operation, county } = loaderData;
	return (
		<Page title={t("link.title", { survey: wordsIn(title, i18n.language), season })} lead={t("link.lead")}>
			<DescriptionList
				items={[
					{ term: t("link.operation"), detail: operation },
					{ term: t("link.county"), detail: county },
				]}
			/>
			<Form method="post" className="mt-6">
				<Button>{t("link.open")}</Button>
			</Form>
			<p className="mt-6 text-base text-quiet">{t("link.notYours")}</p>
		</Page>
	);
}

import { redirect } from "react-router";
import type { Route } from "./+types/sign-in-callback";
import { type Account, grantFirstCoordinator, type Identity, recordSignIn } from "#app/auth/accounts.server.ts";
import { logEvent } from "#app/auth/event-log.server.ts";
import { forgetNext, readNext } from "#app/auth/next-page.server.ts";
import { clearedStateCookies, failureOf, finishSignIn } from "#app/auth/provider.server.ts";
import { scopedTransaction } from "#app/auth/scope.server.ts";
import { sessionContext } from "#app/auth/session.server.ts";
import { languageCookie } from "#app/i18n/middleware.server.ts";
import { env } from "#app/lib/env.server.ts";
import { log } from "#app/lib/log.server.ts";

/** Where the provider sends a browser back to. Whatever went wrong ends on a page that says how to go on. */
export async function loader({ context, request }: Route.LoaderArgs) {
	const next = await readNext(request);
	const headers = new Headers();
	for (const cookie of clearedStateCookies(request)) headers.append("set-cookie", cookie);
	let identity: Identity;
	try {
		identity = await finishSignIn(request);
	} catch (error) {
		const reason = failureOf(error);
		if (reason === "away" || reason === "failed") log.error({ err: error }, "sign-in failed");
		await scopedTransaction({ kind: "none" }, (trx) =>
			logEvent(trx, { personId: null, action: "auth.sign_in_failed", subjectKind: "sign_in", subjectId: reason }),
		);
		return redirect(`/sign-in?problem=${reason}&next=${encodeURIComponent(next)}`, { status: 303, headers });
	}

	const account = await admit(identity);
	const session = context.get(sessionContext);
	session.set("personId", account.personId);
	// A person's own rights are wider than a link's, and one visitor is one of the two.
	session.unset("personalLinkId");
	session.flash("toast", { key: "common:toast.signedIn", values: { name: account.displayName } });
	headers.append("set-cookie", await forgetNext());
	const chosen = await languageCookie.parse(request.headers.get("cookie"));
	if (account.language && !chosen) headers.append("set-cookie", await languageCookie.serialize(account.language));
	return redirect(next, { status: 303, headers });
}

function admit(identity: Identity): Promise<Account> {
	return scopedTransaction({ kind: "none" }, async (trx) => {
		const account = await recordSignIn(trx, identity);
		if (env().COORDINATOR_SUBJECT === identity.subject) await grantFirstCoordinator(trx, account.personId);
		return account;
	});
}

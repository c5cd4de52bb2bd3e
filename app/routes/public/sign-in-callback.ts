import { redirect } from "react-router";
import type { Route } from "./+types/sign-in-callback";
import { type Acceptance, acceptInvitation } from "#app/auth/accepting.server.ts";
import { type Account, grantFirstCoordinator, type Identity, recordSignIn } from "#app/auth/accounts.server.ts";
import { logEvent } from "#app/auth/event-log.server.ts";
import { forgetInvitation, readInvitation } from "#app/auth/kept-invitation.server.ts";
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

	const invitation = await readInvitation(request);
	const { account, acceptance } = await admit(identity, invitation);
	const session = context.get(sessionContext);
	session.set("personId", account.personId);
	// A person's own rights are wider than a link's, and one visitor is one of the two.
	session.unset("personalLinkId");
	session.flash("toast", {
		key: `common:toast.${toastOf[acceptance ?? "none"]}`,
		values: { name: account.displayName },
	});
	headers.append("set-cookie", await forgetNext());
	if (invitation) headers.append("set-cookie", await forgetInvitation());
	const chosen = await languageCookie.parse(request.headers.get("cookie"));
	if (account.language && !chosen) headers.append("set-cookie", await languageCookie.serialize(account.language));
	// Whoever signed in as somebody else is told on the invitation's own page, which stays open.
	const refused = acceptance === "other_address" || acceptance === "not_verified";
	return redirect(refused ? `/invitation/${invitation}?problem=${acceptance}` : next, { status: 303, headers });
}

const toastOf: Record<Acceptance | "none", string> = {
	none: "signedIn",
	accepted: "invitationAccepted",
	not_open: "invitationOver",
	other_address: "signedIn",
	not_verified: "signedIn",
};

type Admitted = { account: Account; acceptance: Acceptance | null };

/** Signs somebody in, and in the same transaction accepts the invitation that they came with. */
function admit(identity: Identity, invitation: string | null): Promise<Admitted> {
	return scopedTransaction({ kind: "none" }, async (trx) => {
		const account = await recordSignIn(trx, identity);
		if (env().COORDINATOR_SUBJECT === identity.subject) await grantFirstCoordinator(trx, account.personId);
		const acceptance = invitation ? await acceptInvitation(trx, account.personId, identity, invitation) : null;
		return { account, acceptance };
	});
}

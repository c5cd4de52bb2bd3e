import { createHash, randomBytes } from "node:crypto";
import { sql } from "kysely";
import type { Identity } from "./accounts.server.ts";
import { addGrant } from "./grants.server.ts";
import { type InvitedRole, logInvitation } from "./invitations.server.ts";
import { scopedTransaction, type Trx } from "./scope.server.ts";

const hash = (token: string) => createHash("sha256").update(token).digest("base64url");

/** The page of a link: what it invites to. Looks only, as mail scanners open links too; it does not tell the address. */
export function findInvitation(token: string) {
	return scopedTransaction({ kind: "none" }, async (trx) => {
		const found = await selectOpen(trx, token)?.executeTakeFirst();
		return found && { ...found, role: found.role as InvitedRole };
	});
}
export type OpenInvitation = NonNullable<Awaited<ReturnType<typeof findInvitation>>>;

/** Open is what was neither accepted nor withdrawn and has not expired: one answer for all that is not. */
function selectOpen(trx: Trx, token: string) {
	if (!/^[A-Za-z0-9_-]{43}$/.test(token)) return undefined;
	return trx
		.selectFrom("auth.invitation as i")
		.innerJoin("auth.person as b", "b.person_id", "i.invited_by")
		.where("i.token_hash", "=", hash(token))
		.where("i.accepted_at", "is", null)
		.where("i.withdrawn_at", "is", null)
		.where("i.expires_at", ">", sql<Date>`now()`)
		.select([
			"i.invitation_id as invitationId",
			"i.role",
			"i.state_fips as stateFips",
			"i.language",
			sql<string | null>`i.ends_on::text`.as("endsOn"),
			"i.expires_at as expiresAt",
			"b.display_name as invitedBy",
		]);
}

/** Whether an invitation still goes out by mail, and to whom. */
export async function findLetter(trx: Trx, invitationId: string) {
	return trx
		.selectFrom("auth.invitation as i")
		.innerJoin("auth.person as b", "b.person_id", "i.invited_by")
		.where("i.invitation_id", "=", invitationId)
		.where("i.accepted_at", "is", null)
		.where("i.withdrawn_at", "is", null)
		.where("i.sent_at", "is", null)
		.where("i.failed_as", "is", null)
		.where("i.expires_at", ">", sql<Date>`now()`)
		.select(["i.email", "i.role", "i.state_fips as stateFips", "i.language", "i.expires_at as expiresAt"])
		.select(["b.display_name as invitedBy", sql<string | null>`i.ends_on::text`.as("endsOn")])
		.forUpdate("i")
		.executeTakeFirst();
}

/** Makes the link of a letter that goes out now: 256 random bits, of which the hash alone is kept. The one before is dead. */
export async function makeLink(trx: Trx, invitationId: string): Promise<string> {
	const token = randomBytes(32).toString("base64url");
	await trx
		.updateTable("auth.invitation")
		.set({ token_hash: hash(token) })
		.where("invitation_id", "=", invitationId)
		.execute();
	return token;
}

/** What became of the letter whose link this is; nothing where the invitation was sent again meanwhile. */
export async function markLetter(
	trx: Trx,
	token: string,
	outcome: "sent" | "returned" | "uncertain" | "server_away",
): Promise<void> {
	await trx
		.updateTable("auth.invitation")
		.set(outcome === "sent" ? { sent_at: sql`now()` } : { failed_as: outcome })
		.where("token_hash", "=", hash(token))
		.execute();
}

export type Acceptance = "accepted" | "not_open" | "other_address" | "not_verified";

/**
 * Accepts an invitation for whoever just signed in, once. The link shows that the letter was read, and the provider's word
 * that the address is theirs; neither alone gives a role. From then on the account's issuer and subject hold it, whatever
 * becomes of the address.
 */
export async function acceptInvitation(
	trx: Trx,
	personId: string,
	identity: Pick<Identity, "email" | "emailVerified">,
	token: string,
): Promise<Acceptance> {
	const open = await selectOpen(trx, token)?.select(["i.email", "i.invited_by"]).forUpdate("i").executeTakeFirst();
	if (!open) return "not_open";
	if (identity.email?.toLowerCase() !== open.email.toLowerCase()) return "other_address";
	if (identity.emailVerified !== true) return "not_verified";
	const role = open.role as InvitedRole;
	const places = role === "associate" ? open.stateFips : [null];
	for (const stateFips of places)
		await addGrant(trx, { personId, role, stateFips, endsOn: open.endsOn, grantedBy: open.invited_by });
	await trx
		.updateTable("auth.invitation")
		.set({ accepted_by: personId, accepted_at: sql`now()`, token_hash: null })
		.where("invitation_id", "=", open.invitationId)
		.execute();
	await logInvitation(trx, personId, "accepted", open.invitationId, role, open.stateFips);
	return "accepted";
}

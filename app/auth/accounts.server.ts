import { logEvent } from "./event-log.server.ts";
import type { Trx } from "./scope.server.ts";

/** Who the provider says has signed in. Issuer and subject are the key; name and address are only shown. */
export type Identity = {
	issuer: string;
	subject: string;
	displayName: string;
	email: string | null;
	/** True where the provider itself has verified the address; never kept, as it is only asked for at the sign-in. */
	emailVerified?: boolean;
};

export type Account = {
	personId: string;
	subject: string;
	displayName: string;
	email: string | null;
	language: string | null;
};

/** Finds or makes the person of an identity, with the newest name and address. Language and grants stay as they were. */
export async function recordSignIn(trx: Trx, identity: Identity): Promise<Account> {
	const names = { display_name: identity.displayName, email: identity.email };
	const row = await trx
		.insertInto("auth.person")
		.values({ issuer: identity.issuer, subject: identity.subject, ...names })
		.onConflict((conflict) => conflict.columns(["issuer", "subject"]).doUpdateSet(names))
		.returning(["person_id", "subject", "display_name", "email", "language"])
		.executeTakeFirstOrThrow();
	await logEvent(trx, {
		personId: row.person_id,
		action: "auth.signed_in",
		subjectKind: "person",
		subjectId: row.person_id,
	});
	return toAccount(row);
}

/**
 * Makes the configured person coordinator when the network has none: somebody must be able to grant the first role.
 * Once there is one, the setting does nothing, so that a revoked coordinator does not come back by signing in.
 */
export async function grantFirstCoordinator(trx: Trx, personId: string): Promise<boolean> {
	const ever = await trx
		.selectFrom("auth.role_grant")
		.select("role_grant_id")
		.where("role", "=", "coordinator")
		.limit(1)
		.execute();
	if (ever.length > 0) return false;
	await trx.insertInto("auth.role_grant").values({ person_id: personId, role: "coordinator" }).execute();
	await logEvent(trx, {
		personId,
		action: "grant.first_coordinator",
		subjectKind: "person",
		subjectId: personId,
	});
	return true;
}

export async function findAccount(trx: Trx, personId: string): Promise<Account | undefined> {
	const row = await trx
		.selectFrom("auth.person")
		.select(["person_id", "subject", "display_name", "email", "language"])
		.where("person_id", "=", personId)
		.executeTakeFirst();
	return row && toAccount(row);
}

export async function setLanguage(trx: Trx, personId: string, language: "en" | "es"): Promise<void> {
	await trx.updateTable("auth.person").set({ language }).where("person_id", "=", personId).execute();
}

type Row = { person_id: string; subject: string; display_name: string; email: string | null; language: string | null };

function toAccount(row: Row): Account {
	return {
		personId: row.person_id,
		subject: row.subject,
		displayName: row.display_name,
		email: row.email,
		language: row.language,
	};
}

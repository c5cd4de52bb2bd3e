import { sql } from "kysely";
import { z } from "zod";
import { logEvent } from "./event-log.server.ts";
import { lastDay, lastDayProblem } from "./grant-end.server.ts";
import { listStates } from "./grants.server.ts";
import type { Trx } from "./scope.server.ts";
import type { Coordinator } from "./viewer.ts";

/** So long an invitation can be accepted; sent again, it begins anew. */
export const invitationDays = 14;
export const invitedRoles = ["associate", "coordinator", "researcher"] as const;
export type InvitedRole = (typeof invitedRoles)[number];

const several = (value: unknown) => (value === undefined ? [] : Array.isArray(value) ? value : [value]);

export const InvitationForm = z.discriminatedUnion("step", [
	z.object({
		step: z.literal("invite"),
		email: z.string({ error: "empty" }).trim().min(1, "empty").max(254, "too_long").pipe(z.email("email_wrong")),
		role: z.enum(invitedRoles, { error: "choice_wrong" }),
		/** Read for associates only. */
		states: z.preprocess(several, z.array(z.string().regex(/^\d{2}$/, "choice_wrong")).max(60)),
		language: z.enum(["en", "es"], { error: "choice_wrong" }),
		endsOn: lastDay,
	}),
	z.object({ step: z.literal("again"), invitationId: z.uuid("choice_wrong") }),
	z.object({ step: z.literal("withdraw"), invitationId: z.uuid("choice_wrong") }),
]);
export type NewInvitation = Extract<z.infer<typeof InvitationForm>, { step: "invite" }>;

const expiry = sql<Date>`now() + make_interval(days => ${invitationDays})`;
type Refused = { refused: "states_needed" | "end_past" | "end_far" | "already_invited" | "not_found" };

/** Notes an invitation; its letter is the caller's to queue. One that waits for the same address and role is not doubled. */
export async function invite(
	trx: Trx,
	viewer: Coordinator,
	{ email, role, states, language, endsOn }: NewInvitation,
): Promise<{ invitationId: string } | Refused> {
	const known = await listStates(trx);
	const stateFips = role === "associate" ? [...new Set(states)].toSorted() : [];
	if (role === "associate" && (stateFips.length === 0 || stateFips.some((state) => !known.includes(state))))
		return { refused: "states_needed" };
	const problem = await lastDayProblem(trx, endsOn);
	if (problem) return { refused: problem };
	const row = await trx
		.insertInto("auth.invitation")
		.values({
			email,
			role,
			state_fips: stateFips,
			language,
			ends_on: endsOn ?? null,
			invited_by: viewer.personId,
			expires_at: expiry,
		})
		.onConflict((conflict) => conflict.doNothing())
		.returning("invitation_id")
		.executeTakeFirst();
	if (!row) return { refused: "already_invited" };
	await logInvitation(trx, viewer.personId, "sent", row.invitation_id, role, stateFips);
	return { invitationId: row.invitation_id };
}

/** Sends an invitation again, also one that has expired: it begins anew, and the link of the letter before is dead. */
export async function inviteAgain(
	trx: Trx,
	viewer: Coordinator,
	invitationId: string,
): Promise<{ invitationId: string } | Refused> {
	const open = await findOpen(trx, invitationId);
	if (!open) return { refused: "not_found" };
	// Its last day may have gone by since.
	const problem = await lastDayProblem(trx, open.endsOn);
	if (problem) return { refused: problem };
	await trx
		.updateTable("auth.invitation")
		.set({ invited_by: viewer.personId, invited_at: sql`now()`, expires_at: expiry })
		.set({ token_hash: null, sent_at: null, failed_as: null })
		.where("invitation_id", "=", invitationId)
		.execute();
	await logInvitation(trx, viewer.personId, "sent_again", invitationId, open.role, open.stateFips);
	return { invitationId };
}

/** Takes an invitation back: its link opens nothing any more. One that was accepted is ended as a grant is. */
export async function withdrawInvitation(trx: Trx, viewer: Coordinator, invitationId: string) {
	const open = await findOpen(trx, invitationId);
	if (!open) return "not_found" as const;
	await trx
		.updateTable("auth.invitation")
		.set({ withdrawn_by: viewer.personId, withdrawn_at: sql`now()`, token_hash: null })
		.where("invitation_id", "=", invitationId)
		.execute();
	await logInvitation(trx, viewer.personId, "withdrawn", invitationId, open.role, open.stateFips);
	return "withdrawn" as const;
}

async function findOpen(trx: Trx, invitationId: string) {
	const row = await trx
		.selectFrom("auth.invitation")
		.select(["role", "state_fips as stateFips", sql<string | null>`ends_on::text`.as("endsOn")])
		.where("invitation_id", "=", invitationId)
		.where("accepted_at", "is", null)
		.where("withdrawn_at", "is", null)
		.forUpdate()
		.executeTakeFirst();
	return row && { ...row, role: row.role as InvitedRole };
}

export type InvitationState = "waiting" | "sent" | "failed" | "expired" | "accepted" | "withdrawn";
export type ListedInvitation = Awaited<ReturnType<typeof listInvitations>>[number];

/** Invitations for the coordinator: those that wait first, then what became of the others, the newest first. */
export async function listInvitations(trx: Trx, _viewer: Coordinator) {
	const rows = await trx
		.selectFrom("auth.invitation as i")
		.innerJoin("auth.person as b", "b.person_id", "i.invited_by")
		.leftJoin("auth.person as a", "a.person_id", "i.accepted_by")
		.select([
			"i.invitation_id as invitationId",
			"i.email",
			"i.role",
			"i.state_fips as stateFips",
			"i.language",
			sql<string | null>`i.ends_on::text`.as("endsOn"),
			"b.display_name as invitedBy",
			"i.invited_at as invitedAt",
			"i.expires_at as expiresAt",
			"a.display_name as acceptedBy",
			"i.accepted_at as acceptedAt",
			sql<InvitationState>`case when i.accepted_at is not null then 'accepted'
				when i.withdrawn_at is not null then 'withdrawn' when i.expires_at <= now() then 'expired'
				when i.failed_as is not null then 'failed' when i.sent_at is not null then 'sent' else 'waiting' end`.as("state"),
		])
		.orderBy(sql`i.accepted_at is null and i.withdrawn_at is null`, "desc")
		.orderBy("i.invited_at", "desc")
		.orderBy("i.invitation_id")
		.limit(200)
		.execute();
	return rows.map((row) => ({ ...row, role: row.role as InvitedRole }));
}

/** Writes what became of an invitation. Which address it went to is not in the log. */
export function logInvitation(
	trx: Trx,
	personId: string,
	verb: "sent" | "sent_again" | "withdrawn" | "accepted",
	invitationId: string,
	role: InvitedRole,
	stateFips: string[],
): Promise<void> {
	return logEvent(trx, {
		personId,
		action: `invitation.${verb}`,
		subjectKind: "invitation",
		subjectId: invitationId,
		stateFips: stateFips.length === 1 ? stateFips[0]! : null,
		detail: { role, states: stateFips },
	});
}

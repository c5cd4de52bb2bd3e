import { sql } from "kysely";
import { z } from "zod";
import { logEvent } from "./event-log.server.ts";
import { findTerm, grantYear, selectTerms } from "./research-term.server.ts";
import { scopedTransaction, type Trx } from "./scope.server.ts";
import type { Coordinator, Person } from "./viewer.ts";

/** The agreement's wording has a version, since each request stores which one was accepted. */
export const agreementVersion = "2026-1";

export const AccessRequestForm = z.object({
	affiliation: z.string({ error: "empty" }).trim().min(1, "empty").max(200, "too_long"),
	purpose: z.string({ error: "empty" }).trim().min(1, "empty").max(4000, "too_long"),
	agreed: z.literal("on", { error: "agreement_needed" }),
});

export type AccessState = {
	requestedAt: Date;
	affiliation: string;
	purpose: string;
	decision: "approved" | "declined" | null;
	decisionReason: string | null;
} | null;

// The data room has no transaction of its own: it reads as the reader, and asks for these few things by name.

/** The newest request of a person, or null before the first. */
export function findOwnRequest(person: Person): Promise<AccessState> {
	return scopedTransaction({ kind: "none" }, async (trx) => {
		const row = await trx
			.selectFrom("auth.access_request")
			.select(["requested_at", "affiliation", "purpose", "decision", "decision_reason"])
			.where("person_id", "=", person.personId)
			.orderBy("requested_at", "desc")
			.limit(1)
			.executeTakeFirst();
		if (!row) return null;
		return {
			requestedAt: row.requested_at,
			affiliation: row.affiliation,
			purpose: row.purpose,
			decision: row.decision as "approved" | "declined" | null,
			decisionReason: row.decision_reason,
		};
	});
}

/**
 * Files a request. A person has one open request at a time, so a double tap files one; one whose access goes on for long has
 * nothing to ask for yet.
 */
export function requestAccess(
	person: Person,
	form: z.infer<typeof AccessRequestForm>,
): Promise<"requested" | "already_open" | "not_yet"> {
	return scopedTransaction({ kind: "none" }, async (trx) => {
		const term = await findTerm(trx, person.personId);
		if (term && !term.renewable) return "not_yet";
		const row = await trx
			.insertInto("auth.access_request")
			.values({
				person_id: person.personId,
				affiliation: form.affiliation,
				purpose: form.purpose,
				agreement_version: agreementVersion,
				agreed_at: new Date(),
			})
			.onConflict((conflict) => conflict.column("person_id").where("decision", "is", null).doNothing())
			.returning("access_request_id")
			.executeTakeFirst();
		if (!row) return "already_open";
		const subject = { subjectKind: "access_request", subjectId: row.access_request_id };
		await logEvent(trx, { personId: person.personId, action: "access.requested", ...subject });
		return "requested";
	});
}

/** Records that a file was taken, before it is given out: once for each release that has figures in it. */
export function recordDownload(person: Person, releaseIds: string[], fileKey: string): Promise<void> {
	return scopedTransaction({ kind: "none" }, async (trx) => {
		await trx
			.insertInto("log.download")
			.values(releaseIds.map((release_id) => ({ person_id: person.personId, release_id, file_key: fileKey })))
			.execute();
	});
}

export type AccessRequest = Awaited<ReturnType<typeof listAccessRequests>>[number];

/** Requests for the coordinator, open ones first. */
export function listAccessRequests(trx: Trx, _viewer: Coordinator) {
	return (
		trx
			.selectFrom("auth.access_request as r")
			.innerJoin("auth.person as p", "p.person_id", "r.person_id")
			.leftJoinLateral(
				selectTerms(trx)
					.where(sql<boolean>`g.person_id = r.person_id`)
					.limit(1)
					.as("term"),
				(join) => join.onTrue(),
			)
			.select(["term.holds", "term.lastDay"])
			.select([
				"r.access_request_id as accessRequestId",
				"r.person_id as personId",
				"p.display_name as name",
				"p.email",
				"r.affiliation",
				"r.purpose",
				"r.agreement_version as agreementVersion",
				"r.requested_at as requestedAt",
				"r.decision",
				"r.decision_reason as decisionReason",
				"r.decided_at as decidedAt",
			])
			.orderBy((eb) => eb("r.decision", "is not", null))
			// Those that wait, longest first; then the decided, newest first.
			.orderBy(sql`case when r.decision is null then r.requested_at end`)
			.orderBy("r.decided_at", "desc")
			.limit(200)
			.execute()
	);
}

export const AccessDecision = z
	.object({
		accessRequestId: z.uuid(),
		decision: z.enum(["approved", "declined"]),
		reason: z.string().trim().max(2000, "too_long").default(""),
	})
	.refine((form) => form.decision === "approved" || form.reason.length > 0, { path: ["reason"], error: "empty" });

/** Decides a request once; approving gives the researcher's role for a year, or a year more, in the same transaction. */
export async function decideAccess(trx: Trx, viewer: Coordinator, form: z.infer<typeof AccessDecision>) {
	const request = await trx
		.updateTable("auth.access_request")
		.set({
			decision: form.decision,
			decision_reason: form.reason || null,
			decided_by: viewer.personId,
			decided_at: new Date(),
		})
		.where("access_request_id", "=", form.accessRequestId)
		.where("decision", "is", null)
		.where("person_id", "!=", viewer.personId)
		.returning("person_id")
		.executeTakeFirst();
	if (!request) return "not_found";
	if (form.decision === "approved") await grantYear(trx, viewer, request.person_id);
	const subject = { subjectKind: "access_request", subjectId: form.accessRequestId };
	await logEvent(trx, { personId: viewer.personId, action: `access.${form.decision}`, ...subject });
	return form.decision;
}

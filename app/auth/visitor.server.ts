import { createContext, type MiddlewareFunction } from "react-router";
import { grantHolds } from "./grant-holds.server.ts";
import type { Grants, Person } from "./viewer.ts";
import { senderOf } from "./holder.server.ts";
import { scopedTransaction, type Trx } from "./scope.server.ts";
import { sessionContext } from "./session.server.ts";

type OpenLink = { personalLinkId: string; surveyId: string; operationId: string };
export type Visitor = {
	person: Person | null;
	grants: Grants;
	link: OpenLink | null;
	/** Whose page sends this, by `holderOf`, where the page says so. */
	sender?: string | null;
};

const nobody: Visitor = {
	person: null,
	grants: { coordinator: false, researcher: false, stateFips: [], operationIds: [] },
	link: null,
};

export const visitorContext = createContext<Visitor>(nobody);

/** Looks up person, grants and open link on every request, so that a revoked grant ends at once. */
export const visitorMiddleware: MiddlewareFunction<Response> = async ({ context, request }, next) => {
	const session = context.get(sessionContext);
	const personId = session.get("personId");
	const personalLinkId = session.get("personalLinkId");
	if (personId || personalLinkId) {
		const visitor = await scopedTransaction({ kind: "network" }, async (trx) => ({
			...(personId ? await findPerson(trx, personId) : nobody),
			link: personalLinkId ? await findOpenLink(trx, personalLinkId) : null,
			sender: request.method === "POST" ? senderOf(request) : null,
		}));
		context.set(visitorContext, visitor);
	}
	return next();
};

async function findPerson(trx: Trx, personId: string): Promise<Pick<Visitor, "person" | "grants">> {
	const row = await trx
		.selectFrom("auth.person")
		.select(["person_id", "display_name", "email", "language"])
		.where("person_id", "=", personId)
		.executeTakeFirst();
	if (!row) return nobody;
	const grants = await trx
		.selectFrom("auth.role_grant as g")
		.select(["g.role", "g.state_fips", "g.operation_id"])
		.where("g.person_id", "=", personId)
		.where(grantHolds("g"))
		.execute();
	return {
		person: {
			personId: row.person_id,
			displayName: row.display_name,
			email: row.email,
			language: row.language as Person["language"],
		},
		grants: {
			coordinator: grants.some((grant) => grant.role === "coordinator"),
			researcher: grants.some((grant) => grant.role === "researcher"),
			stateFips: grants.flatMap((grant) => grant.state_fips ?? []).toSorted(),
			operationIds: grants.flatMap((grant) => grant.operation_id ?? []),
		},
	};
}

async function findOpenLink(trx: Trx, personalLinkId: string): Promise<OpenLink | null> {
	const row = await trx
		.selectFrom("collect.personal_link")
		.select(["personal_link_id", "survey_id", "operation_id"])
		.where("personal_link_id", "=", personalLinkId)
		.where("replaced_at", "is", null)
		.executeTakeFirst();
	return (
		(row && { personalLinkId: row.personal_link_id, surveyId: row.survey_id, operationId: row.operation_id }) || null
	);
}

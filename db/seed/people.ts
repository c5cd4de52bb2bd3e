import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate, Coordinator, Person } from "#app/auth/viewer.ts";

/** The demo's associate who makes surveys, drafts releases and writes reports, with the states granted. */
export async function findAssociate(trx: Trx): Promise<Associate> {
	const person = await getPerson(trx, "demo-del-fenwick");
	const grants = await trx
		.selectFrom("auth.role_grant")
		.select("state_fips")
		.where("person_id", "=", person.personId)
		.where("role", "=", "associate")
		.orderBy("state_fips")
		.execute();
	return { ...person, role: "associate", stateFips: grants.flatMap(({ state_fips }) => state_fips ?? []) };
}

/** The demo's second person, who approves. */
export async function findCoordinator(trx: Trx): Promise<Coordinator> {
	return { ...(await getPerson(trx, "demo-marit-osgood")), role: "coordinator" };
}

async function getPerson(trx: Trx, subject: string): Promise<Person> {
	const row = await trx
		.selectFrom("auth.person")
		.select(["person_id", "display_name", "email", "language"])
		.where("subject", "=", subject)
		.executeTakeFirstOrThrow();
	return {
		personId: row.person_id,
		displayName: row.display_name,
		email: row.email,
		language: row.language as Person["language"],
	};
}

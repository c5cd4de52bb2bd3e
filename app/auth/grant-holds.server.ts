import { sql } from "kysely";

/**
 * Whether a grant holds at this moment: not ended by anybody, and its last day not gone by on the network's clock. Everything
 * that gives rights asks this and nothing else. @param grant the grant's alias in the query.
 */
export const grantHolds = (grant: string) =>
	sql<boolean>`auth.grant_holds(${sql.ref(`${grant}.revoked_at`)}, ${sql.ref(`${grant}.ends_on`)})`;

import { sql } from "kysely";
import { grantHolds } from "./grant-holds.server.ts";
import { type Trx, underScope } from "./scope.server.ts";
import type { Coordinator } from "./viewer.ts";

export type NetworkState = {
	stateFips: string;
	/** Who serves the state; nobody does where the network is not. */
	associates: string[];
	counties: number;
	districts: number;
	redrawnAt: Date | null;
};

/** Every state, with who serves it and how its counties are grouped. */
export async function listNetworkStates(trx: Trx, _viewer: Coordinator): Promise<NetworkState[]> {
	const grants = await trx
		.selectFrom("auth.role_grant as g")
		.innerJoin("auth.person as p", "p.person_id", "g.person_id")
		.select(["g.state_fips as stateFips", "p.display_name as name"])
		.where("g.role", "=", "associate")
		.where(grantHolds("g"))
		.orderBy("p.display_name")
		.execute();
	const states = await trx
		.selectFrom("directory.state as s")
		.select("s.state_fips as stateFips")
		.select(
			sql<number>`(select count(*)::int from directory.county c where c.state_fips = s.state_fips)`.as("counties"),
		)
		.select(
			sql<number>`(select count(*)::int from directory.district d where d.state_fips = s.state_fips)`.as("districts"),
		)
		.orderBy("s.name")
		.execute();
	const changes = await underScope(trx, { kind: "network" }, () =>
		trx
			.selectFrom("directory.district_change")
			.select(["state_fips as stateFips", (eb) => eb.fn.max("changed_at").as("redrawnAt")])
			.groupBy("state_fips")
			.execute(),
	);
	const redrawnAt = new Map(changes.map((change) => [change.stateFips, change.redrawnAt]));
	return states.map((state) => ({
		...state,
		redrawnAt: redrawnAt.get(state.stateFips) ?? null,
		associates: grants.filter(({ stateFips }) => stateFips === state.stateFips).map(({ name }) => name),
	}));
}

// Fills the demo's database: an invented network, three seasons of answers, their releases and reports. Each step is
// one transaction and is known to be done by what it leaves behind: a seed that was interrupted goes on at the next start,
// and a second run changes nothing.
import type { Kysely } from "kysely";
import type { Trx } from "#app/auth/scope.server.ts";
import { connect } from "#db/connect.ts";
import type { DB } from "#db/schema.ts";
import { fillNetwork } from "./network.ts";
import { findAssociate, findCoordinator } from "./people.ts";
import { fillRelease, hasRelease, isOver, type Team } from "./releases.ts";
import { listSeasons, type Season } from "./seasons.ts";
import { report } from "./steps.ts";
import { fillSeason, hasSurvey } from "./survey.ts";

const nameOf = ({ form, season }: Season) => `${form === "bloom_watch" ? "Bloom" : "Season"} ${season}`;
const there = "already there";

async function seed(owner: Kysely<DB>, issuer: string): Promise<void> {
	const now = new Date();
	await report("Growers and people", () =>
		inOne(owner, async (trx) => ((await hasOperations(trx)) ? there : fillNetwork(trx, issuer))),
	);
	const team: Team = {
		associate: await inOne(owner, findAssociate),
		coordinator: await inOne(owner, findCoordinator),
		codeVersion: process.env.CODE_VERSION ?? "unversioned",
	};
	const seasons = listSeasons(now);
	for (const season of seasons) {
		await report(nameOf(season), () =>
			inOne(owner, async (trx) =>
				(await hasSurvey(trx, season)) ? there : fillSeason(trx, team.associate, season, now),
			),
		);
	}
	for (const season of seasons.filter(isOver)) {
		await report(`Figures of ${nameOf(season).toLowerCase()}`, () =>
			inOne(owner, async (trx) => ((await hasRelease(trx, season)) ? there : fillRelease(trx, team, season))),
		);
	}
}

function inOne<T>(owner: Kysely<DB>, work: (trx: Trx) => Promise<T>): Promise<T> {
	return owner.transaction().execute(work);
}

async function hasOperations(trx: Trx): Promise<boolean> {
	return (await trx.selectFrom("directory.operation").select("operation_id").limit(1).execute()).length > 0;
}

const { DATABASE_OWNER_URL, OAUTH_ISSUER } = process.env;
if (!DATABASE_OWNER_URL || !OAUTH_ISSUER) throw new Error("DATABASE_OWNER_URL and OAUTH_ISSUER must be set");
const owner = connect(DATABASE_OWNER_URL, { max: 1, name: "tallygrove-seed" });
try {
	await seed(owner, OAUTH_ISSUER);
} finally {
	await owner.destroy();
}

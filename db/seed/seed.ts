// Fills the demo's database: an invented network, three seasons of answers, two releases with their reports. Each step is
// one transaction or finds its own half-done work again, and knows by what it leaves behind whether it is done: a seed
// that was interrupted goes on at the next start, and a second run changes nothing.
import type { Kysely } from "kysely";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { connect } from "#db/connect.ts";
import type { DB } from "#db/schema.ts";
import { fillNetwork } from "./network.ts";
import { findAssociate } from "./people.ts";
import { listSeasons } from "./seasons.ts";
import { report } from "./steps.ts";
import { fillSeason, hasSurvey } from "./survey.ts";

const there = "already there";

async function seed(owner: Kysely<DB>, issuer: string): Promise<void> {
	const now = new Date();
	await report("Growers and people", () =>
		inOne(owner, async (trx) => ((await hasOperations(trx)) ? there : fillNetwork(trx, issuer))),
	);
	const associate: Associate = await inOne(owner, findAssociate);
	for (const season of listSeasons(now)) {
		await report(`Season ${season.season}`, () =>
			inOne(owner, async (trx) => ((await hasSurvey(trx, season)) ? there : fillSeason(trx, associate, season, now))),
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

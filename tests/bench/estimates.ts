import { Kysely, PostgresDialect } from "kysely";
import { type Client, Pool } from "pg";
import { estimateSurvey } from "#app/estimate/survey.ts";
import { listTallies } from "#app/tally/tally.server.ts";
import type { FrameStratum, KeptTally } from "#app/tally/tally.ts";
import type { DB } from "#db/schema.ts";
import { type Bench, linesOf } from "./line.ts";
import { medians, timed } from "./timing.ts";

/** Reads a survey's kept tallies and estimates loss, with its standard error, in every county, district, state and region. */
export async function estimates(bench: Bench, owner: Client, surveyId: string, of: string): Promise<void> {
	const db = poolBeside(owner);
	const read = () => db.transaction().execute((trx) => listTallies(trx, surveyId));
	try {
		const tallies = await read();
		const input = {
			measures: [{ key: "crop_loss", kind: "ratio" as const, scale: 100, unit: "percent" }],
			frame: frameOf(tallies),
			tallies,
			areasOfCounty: new Map(tallies.map(({ countyFips }) => [countyFips, pathOf(countyFips)])),
		};
		let made = 0;
		const time = await medians(bench.runs, {
			read: () => timed(read),
			estimate: () => timed(() => (made = estimateSurvey(input).estimates.length)),
		});
		const goal = "under 1,000 together";
		bench.print(
			...linesOf({ name: `reading the ${tallies.length} tallies of ${of}`, times: time.read, goal }),
			...linesOf({ name: `${made} estimates with standard errors`, times: time.estimate, goal }),
		);
	} finally {
		await db.destroy();
	}
}

function poolBeside({ host, port, database, user, password }: Client): Kysely<DB> {
	const pool = new Pool({ host, port, database, user, password: password ?? undefined, max: 1 });
	return new Kysely<DB>({ dialect: new PostgresDialect({ pool }) });
}

/** A frame in which two of three answered. */
function frameOf(tallies: readonly KeptTally[]): (FrameStratum & { cropKey: string })[] {
	const strata = new Map<string, FrameStratum & { cropKey: string }>();
	for (const { stratumKey, stateFips, cropKey, n } of tallies) {
		const sizeClass = Number(stratumKey.split(":")[1]);
		const stratum = strata.get(stratumKey) ?? { stratumKey, stateFips, cropKey, sizeClass, frameSize: 0 };
		strata.set(stratumKey, { ...stratum, frameSize: stratum.frameSize + Math.ceil(n * 1.5) });
	}
	return [...strata.values()];
}

/** Nine districts a state, as the counties' numbers fall. */
function pathOf(countyFips: string): string[] {
	const stateFips = countyFips.slice(0, 2);
	return [countyFips, `${stateFips}-${Number(countyFips.slice(2)) % 9}`, stateFips, "network"];
}

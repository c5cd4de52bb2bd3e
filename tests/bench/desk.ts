import { createHash, randomBytes } from "node:crypto";
import { mkdtemp, rm, writeFile } from "node:fs/promises";
import { tmpdir } from "node:os";
import path from "node:path";
import { pathToFileURL } from "node:url";
import type { Client } from "pg";
import { createCookie } from "react-router";
import { quantile } from "simple-statistics";
import { connectOwner } from "#tests/database/surveys-fixture.ts";
import { startStack } from "#tests/helpers/stack.ts";
import { fillDesk } from "./desk-filler.ts";
import type { Bench } from "./line.ts";

/** As many as the goal speaks of, unless every size asked for is smaller. */
const mostOperations = 50_000;
/** Turns in which every list is asked for once, for each of the runs. */
const turnsARun = 6;
const goal = "under 5 times";
const empty = "an empty loader";

/**
 * What each list of the desk costs an associate with 50,000 operations beside a loader that does nothing, behind the same
 * guards: before the database knows anything of its tables, as in the minutes after a survey was opened, and after.
 */
export async function desk({ print, sizes, runs }: Bench): Promise<void> {
	const folder = await mkdtemp(path.join(tmpdir(), "tallygrove-bench-"));
	try {
		const build = path.join(folder, "server.mjs");
		await writeFile(build, buildWithEmptyLoader());
		await using stack = await startStack({ build });
		await using owner = await connectOwner(stack.database.ownerUrl);
		await leaveUnknown(owner);
		const { personId, surveyId } = await fillDesk(owner, Math.min(mostOperations, Math.max(...sizes)));
		const cookie = await signedIn(owner, personId);
		const ask = async (address: string) => {
			const response = await fetch(`${stack.baseUrl}${address}`, { headers: { cookie } });
			const text = await response.text();
			if (response.status !== 200) throw new Error(`${address} answered ${response.status}: ${text.slice(0, 200)}`);
		};
		const addresses = addressesOf(surveyId);
		const lines = async (known: string) => {
			const taken = await takeTurns(addresses, ask, runs * turnsARun);
			const floor = p95(taken.get(empty)!);
			for (const [name, times] of taken)
				print({
					name: `p95 of ${name}, ${known}`,
					value: p95(times),
					unit: "ms",
					...(name !== empty && { floor, goal }),
				});
		};
		await lines("no statistics yet");
		await owner.query("vacuum analyze");
		await lines("with statistics");
	} finally {
		await rm(folder, { recursive: true });
	}
}

const p95 = (times: number[]) => quantile(times, 0.95);

/** The production build with one loader more, which is in no build that is ever served. */
function buildWithEmptyLoader(): string {
	const real = JSON.stringify(pathToFileURL(path.resolve("build/server/index.js")).href);
	return `import { routes as own } from ${real};
		export * from ${real};
		const module = { loader: () => null, default: () => null };
		export const routes = { ...own, empty: { id: "empty", parentId: "routes/desk/layout", path: "empty", module } };`;
}

/** Keeps the database from finding out by itself meanwhile. */
async function leaveUnknown(owner: Client): Promise<void> {
	const { rows } = await owner.query<{ name: string }>(
		"select format('%I.%I', schemaname, tablename) as name from pg_tables where schemaname in ('directory', 'collect', 'log')",
	);
	for (const { name } of rows) await owner.query(`alter table ${name} set (autovacuum_enabled = false)`);
}

/** The cookie of a session that is open in the database. */
async function signedIn(owner: Client, personId: string): Promise<string> {
	const id = randomBytes(32).toString("base64url");
	await owner.query(
		`insert into auth.session (session_hash, person_id, data, expires_at)
		values ($1, $2::uuid, jsonb_build_object('personId', $2::uuid), now() + interval '1 day')`,
		[createHash("sha256").update(id).digest("base64url"), personId],
	);
	const secret = "only-for-tests-0123456789abcdef0123456789abcdef";
	const cookie = await createCookie("tallygrove", { secrets: [secret] }).serialize(id);
	return cookie.split(";")[0]!;
}

/** As a click within the page asks for it: the data of that one loader. */
const data = (page: string, route: string, search = "") =>
	`${page}.data?${new URLSearchParams({ ...Object.fromEntries(new URLSearchParams(search)), _routes: route })}`;

function addressesOf(surveyId: string): Record<string, string> {
	const ofSurvey = (name: string, search = "") =>
		data(`/desk/surveys/${surveyId}/${name}`, `routes/desk/${name}`, search);
	const growers = (search = "") => data("/desk/growers", "routes/desk/growers", search);
	return {
		[empty]: data("/desk/empty", "empty"),
		growers: growers(),
		"growers by county": growers("sort=county"),
		"growers by trees": growers("sort=trees"),
		"growers found by name": growers("q=Fox"),
		"growers not heard from": growers("answered=not_this"),
		surveys: data("/desk/surveys", "routes/desk/surveys"),
		"the desk's first page": data("/desk", "routes/desk/overview"),
		"one survey": data(`/desk/surveys/${surveyId}`, "routes/desk/survey"),
		"who is asked": ofSurvey("responses"),
		"who is asked, by answer": ofSurvey("responses", "sort=answered&direction=desc"),
		"who is asked and has not answered": ofSurvey("responses", "show=not_answered"),
		"who is asked, found by name": ofSurvey("responses", "q=Fox"),
		calls: ofSurvey("calls"),
		"calls found by name": ofSurvey("calls", "q=Fox"),
		"paper forms": ofSurvey("paper"),
		checks: ofSurvey("checks"),
		"checks by grower": ofSurvey("checks", "sort=grower"),
		coding: ofSurvey("coding"),
		answered: ofSurvey("answered"),
		estimates: ofSurvey("estimates"),
		"the log": data("/network/log", "routes/network/log"),
	};
}

/** Every list once a turn, so that others on the machine slow all alike; a first turn warms up and is not counted. */
async function takeTurns(addresses: Record<string, string>, ask: (address: string) => Promise<void>, turns: number) {
	const taken = new Map<string, number[]>(Object.keys(addresses).map((name) => [name, []]));
	for (let turn = 0; turn <= turns; turn++)
		for (const [name, address] of Object.entries(addresses)) {
			const began = performance.now();
			await ask(address);
			if (turn > 0) taken.get(name)!.push(performance.now() - began);
		}
	return taken;
}

import { Client } from "pg";
import { people } from "#fakes/sign-in/people.mjs";
import { inventOperations, type SeedOperation } from "./operations.ts";
import { seededRandom } from "./random.ts";

const operationCount = 1_200;

/** Fills an empty database with the demo's invented network: growers, plantings, and the people of the demo sign-in. */
async function seed(owner: Client, issuer: string): Promise<string> {
	const { rows: present } = await owner.query("select 1 from directory.operation limit 1");
	if (present.length > 0) return "already filled";
	const { rows: counties } = await owner.query<{ county_fips: string }>(
		"select county_fips from directory.county order by md5(county_fips)",
	);
	const operations = inventOperations(
		seededRandom(90_210),
		counties.map((county) => county.county_fips),
		operationCount,
	);
	await owner.query("begin");
	await insertOperations(owner, operations);
	await insertPeople(owner, issuer, operations);
	await owner.query("commit");
	const plantings = operations.reduce((sum, operation) => sum + operation.plantings.length, 0);
	return `${operations.length} operations, ${plantings} plantings, ${people.length} people`;
}

async function insertOperations(owner: Client, operations: SeedOperation[]): Promise<void> {
	const all = JSON.stringify(operations);
	await owner.query(
		`insert into directory.owner (owner_id, name)
		select owner_id, owner_name from jsonb_to_recordset($1::jsonb) as o(owner_id uuid, owner_name text)`,
		[all],
	);
	await owner.query(
		`insert into directory.operation (operation_id, owner_id, name, county_fips, state_fips, contact_name, email, language)
		select operation_id, owner_id, name, county_fips, left(county_fips, 2), contact_name, email, language
		from jsonb_to_recordset($1::jsonb) as o(operation_id uuid, owner_id uuid, name text, county_fips text,
			contact_name text, email text, language text)`,
		[all],
	);
	await owner.query(
		`insert into directory.planting (operation_id, crop_key, cultivar, bearing_trees, young_trees, planted_year)
		select o.operation_id, p.crop_key, p.cultivar, p.bearing_trees, p.young_trees, p.planted_year
		from jsonb_to_recordset($1::jsonb) as o(operation_id uuid, plantings jsonb),
			jsonb_to_recordset(o.plantings) as p(crop_key text, cultivar text, bearing_trees int, young_trees int, planted_year int)`,
		[all],
	);
}

/** The demo's people with their grants; a grower gets the first operation of the state, with the grower's own name. */
async function insertPeople(owner: Client, issuer: string, operations: SeedOperation[]): Promise<void> {
	for (const person of people) {
		const { rows } = await owner.query<{ person_id: string }>(
			`insert into auth.person (issuer, subject, display_name, email, language) values ($1, $2, $3, $4, $5) returning person_id`,
			[issuer, person.subject, person.name, person.email, person.language],
		);
		const personId = rows[0]!.person_id;
		const grant = (role: string, stateFips: string | null, operationId: string | null) =>
			owner.query("insert into auth.role_grant (person_id, role, state_fips, operation_id) values ($1, $2, $3, $4)", [
				personId,
				role,
				stateFips,
				operationId,
			]);
		if (person.role === "associate") for (const state of person.stateFips) await grant("associate", state, null);
		if (person.role === "coordinator") await grant("coordinator", null, null);
		if (person.role === "researcher" && person.approved) await grant("researcher", null, null);
		if (person.role !== "grower") continue;
		const own = operations.find((operation) => operation.county_fips.startsWith(person.stateFips[0]!));
		if (!own) continue;
		await owner.query(
			"update directory.operation set contact_name = $1, email = $2, language = $3 where operation_id = $4",
			[person.name, person.email, person.language, own.operation_id],
		);
		await grant("grower", null, own.operation_id);
	}
}

const { DATABASE_OWNER_URL, OAUTH_ISSUER } = process.env;
if (!DATABASE_OWNER_URL || !OAUTH_ISSUER) throw new Error("DATABASE_OWNER_URL and OAUTH_ISSUER must be set");
const owner = new Client({ connectionString: DATABASE_OWNER_URL });
await owner.connect();
try {
	console.log(await seed(owner, OAUTH_ISSUER));
} finally {
	await owner.end();
}

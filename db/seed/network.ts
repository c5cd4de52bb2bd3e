import { type RawBuilder, sql } from "kysely";
import type { Trx } from "#app/auth/scope.server.ts";
import { people } from "#fakes/sign-in/people.mjs";
import { inventOperations, type SeedOperation } from "./operations.ts";
import { listPlaces } from "./places.ts";
import { seededRandom } from "./random.ts";

const operationCount = 1_200;
/** The network began its list of growers before the first season it asked about. */
const listedAt = "2024-02-12T15:00:00Z";

/** The growers, their plantings, and the people of the demo sign-in. */
export async function fillNetwork(trx: Trx, issuer: string): Promise<string> {
	const operations = inventOperations(seededRandom(90_210), listPlaces(), operationCount);
	await insertOperations(trx, operations);
	await insertPeople(trx, issuer, operations);
	const plantings = operations.reduce((sum, operation) => sum + operation.plantings.length, 0);
	const owners = new Set(operations.map(({ owner_id }) => owner_id)).size;
	return `${operations.length} operations of ${owners} owners, ${plantings} plantings, ${people.length} people`;
}

async function insertOperations(trx: Trx, operations: SeedOperation[]): Promise<void> {
	const all = JSON.stringify(operations);
	await sql`insert into directory.owner (owner_id, name)
		select distinct on (owner_id) owner_id, owner_name
		from jsonb_to_recordset(${all}::jsonb) as o(owner_id uuid, owner_name text)`.execute(trx);
	await sql`insert into directory.operation (operation_id, owner_id, name, county_fips, state_fips, contact_name, email,
			phone, language, mass_unit, created_at, updated_at)
		select operation_id, owner_id, name, county_fips, left(county_fips, 2), contact_name, email,
			phone, language, mass_unit, ${listedAt}, ${listedAt}
		from jsonb_to_recordset(${all}::jsonb) as o(operation_id uuid, owner_id uuid, name text, county_fips text,
			contact_name text, email text, phone text, language text, mass_unit text)`.execute(trx);
	await sql`insert into directory.planting (planting_id, operation_id, crop_key, cultivar, bearing_trees, young_trees,
			planted_year, created_at, trees_told_at)
		select p.planting_id, o.operation_id, p.crop_key, p.cultivar, p.bearing_trees, p.young_trees, p.planted_year, ${listedAt}, ${listedAt}
		from jsonb_to_recordset(${all}::jsonb) as o(operation_id uuid, plantings jsonb),
			jsonb_to_recordset(o.plantings) as p(planting_id uuid, crop_key text, cultivar text, bearing_trees int,
				young_trees int, planted_year int)`.execute(trx);
}

/** The demo's people with their grants; a grower gets an operation of the state, under the grower's own name. */
async function insertPeople(trx: Trx, issuer: string, operations: SeedOperation[]): Promise<void> {
	for (const person of people) {
		const { person_id } = await trx
			.insertInto("auth.person")
			.values({
				issuer,
				subject: person.subject,
				display_name: person.name,
				email: person.email,
				language: person.language,
				created_at: listedAt,
			})
			.returning("person_id")
			.executeTakeFirstOrThrow();
		const grant = (
			role: string,
			at: { state_fips?: string; operation_id?: string; ends_on?: RawBuilder<string> } = {},
		) =>
			trx
				.insertInto("auth.role_grant")
				.values({ person_id, role, ...at, granted_at: listedAt })
				.execute();
		if (person.role === "associate")
			for (const state of person.stateFips) await grant("associate", { state_fips: state });
		if (person.role === "coordinator") await grant("coordinator");
		if (person.role === "researcher" && person.approved)
			await grant("researcher", { ends_on: sql`auth.network_today() + 300` });
		if (person.role !== "grower") continue;
		const own = demoOperation(operations, person.stateFips[0]!);
		await trx.updateTable("directory.owner").set({ name: person.name }).where("owner_id", "=", own.owner_id).execute();
		await trx
			.updateTable("directory.operation")
			.set({ contact_name: person.name, email: person.email, language: person.language })
			.where("operation_id", "=", own.operation_id)
			.execute();
		await grant("grower", { operation_id: own.operation_id });
	}
}

/** An apple grower among many, so that the county's figures can be shown beside the grower's own. */
function demoOperation(operations: SeedOperation[], stateFips: string): SeedOperation {
	const inState = operations.filter(({ county_fips }) => county_fips.startsWith(stateFips));
	const neighbors = (operation: SeedOperation) =>
		inState.filter(({ county_fips }) => county_fips === operation.county_fips).length;
	const holdings = (operation: SeedOperation) =>
		operations.filter(({ owner_id }) => owner_id === operation.owner_id).length;
	const fitting = inState.filter(
		(operation) =>
			holdings(operation) === 1 &&
			operation.plantings.length === 2 &&
			operation.plantings.some(({ crop_key }) => crop_key === "apple"),
	);
	return fitting.toSorted((a, b) => neighbors(b) - neighbors(a))[0]!;
}

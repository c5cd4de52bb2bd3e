import type { Client } from "pg";
import { afterAll, beforeAll } from "vitest";
import { createTestDatabase, type TestDatabase } from "#tests/helpers/database.ts";
import { connectOwner, useDatabase } from "./surveys-fixture.ts";

/** The id of the demo's survey after a season's harvest. */
export const surveyOf = (season: number) => `5ea50000-${season}-4000-8000-000000000001`;

/** That of its bloom. */
export const bloomOf = (season: number) => surveyOf(season).replace(/1$/, "2");

/** A clone of the demo's database for the tests of one file, with the owner's eyes on it. Filling the first takes a while. */
export function useDemo() {
	let database: TestDatabase;
	let owner: Client;
	beforeAll(async () => {
		database = await createTestDatabase({ seed: "demo" });
		useDatabase(database);
		owner = await connectOwner(database.ownerUrl);
	}, 240_000);
	afterAll(async () => {
		await owner?.end();
		await database?.drop();
	});
	const rowsOf = async <T extends object>(text: string, values: unknown[] = []) =>
		(await owner.query(text, values)).rows as T[];
	return {
		rowsOf,
		/** The one number that a query gives. */
		numberOf: async (text: string, values: unknown[] = []) =>
			Number(Object.values((await rowsOf<Record<string, unknown>>(text, values))[0] ?? {})[0]),
		databaseName: () => new URL(database.ownerUrl).pathname.slice(1),
	};
}

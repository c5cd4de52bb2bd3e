import type { Client } from "pg";
import { afterAll, beforeAll, expect, test } from "vitest";
import { scopedTransaction } from "#app/auth/scope.server.ts";
import type { Coordinator } from "#app/auth/viewer.ts";
import { networkRules } from "#app/jobs/network-rules.ts";
import { listRulesRows, saveRules } from "#app/release/network-rules.server.ts";
import { formOf, type RulesForm } from "#app/release/rules.schema.ts";
import { createTestDatabase } from "#tests/helpers/database.ts";
import { addPerson, connectOwner, count, useDatabase } from "./surveys-fixture.ts";

let database: Awaited<ReturnType<typeof createTestDatabase>>;
let owner: Client;
let coordinator: Coordinator;

beforeAll(async () => {
	database = await createTestDatabase();
	useDatabase(database);
	owner = await connectOwner(database.ownerUrl);
	coordinator = { ...(await addPerson(owner, "Marit Osgood", [])), role: "coordinator" } as unknown as Coordinator;
});
afterAll(async () => {
	await owner.end();
	await database.drop();
});

const standing = () =>
	scopedTransaction({ kind: "desk", stateFips: [] }, (trx) => listRulesRows(trx, coordinator)).then(
		([latest]) => latest?.networkRulesId ?? 0,
	);
const formWith = (changes: Partial<RulesForm>) =>
	({ ...formOf(networkRules), largestOwners: undefined, largestPercent: undefined, ...changes }) as RulesForm;
const save = (form: RulesForm) =>
	scopedTransaction({ kind: "desk", stateFips: [] }, (trx) => saveRules(trx, coordinator, form, networkRules));
const changes = () => count(owner, "directory.network_rules");

test("what loosens waits until that very change was agreed to, and what tightens does not", async () => {
	const basedOn = await standing();
	expect(await save(formWith({ basedOn, minimumOwners: 6 }))).toEqual({ outcome: "saved" });
	const next = await standing();
	const asked = await save(formWith({ basedOn: next, minimumOwners: 4 }));
	expect(asked).toMatchObject({ outcome: "loosens", loosening: [{ name: "minimumOwners", from: 6, to: 4 }] });
	const agreed = (asked as { agreement: string }).agreement;
	expect(await save(formWith({ basedOn: next, minimumOwners: 3, agreed }))).toMatchObject({ outcome: "loosens" });
	expect(await standing()).toBe(next);
	expect(await save(formWith({ basedOn: next, minimumOwners: 4, agreed }))).toEqual({ outcome: "saved" });
	expect(await count(owner, "log.event where action = 'settings.changed'")).toBe(2);
});

test("two coordinators at once: the second learns of the first and overwrites nothing; the same again is no change", async () => {
	const basedOn = await standing();
	const before = await changes();
	const outcomes = await Promise.all([
		save(formWith({ basedOn, minimumOwners: 7 })),
		save(formWith({ basedOn, minimumOwners: 8 })),
	]);
	expect(outcomes.map(({ outcome }) => outcome).toSorted()).toEqual(["changed_meanwhile", "saved"]);
	expect(await changes()).toBe(before + 1);
	const now = await owner.query("select rules from directory.network_rules order by network_rules_id desc limit 1");
	const { minimumOwners } = now.rows[0].rules;
	expect(await save(formWith({ basedOn: await standing(), minimumOwners }))).toEqual({ outcome: "unchanged" });
	expect(await changes()).toBe(before + 1);
});

import { sql } from "kysely";
import { beforeEach, expect, test } from "vitest";
import { listNetworkStates } from "#app/auth/network-states.server.ts";
import { inState, scopedTransaction, type Trx } from "#app/auth/scope.server.ts";
import type { Associate, Coordinator } from "#app/auth/viewer.ts";
import { findStateDistricts, redrawDistricts, undoRedrawing } from "#app/directory/districts.server.ts";
import { carryOut, readTyped } from "#app/directory/redrawing.server.ts";
import { addPerson, asDesk, openSurveysDatabase } from "./surveys-fixture.ts";

const { owner, iowa, wisconsin } = await openSurveysDatabase();
const { personId } = await addPerson(owner, "Marit Osgood", []);
const coordinator: Coordinator = {
	role: "coordinator",
	personId,
	displayName: "Marit Osgood",
	email: null,
	language: null,
};

beforeEach(async () => {
	await owner.query("update directory.county set district_key = null where state_fips = '19'");
	await owner.query("delete from directory.district where state_fips = '19'");
	await owner.query("delete from directory.district_change");
	await owner.query("insert into directory.district values ('IA-1', '19', 'West')");
	await owner.query("update directory.county set district_key = 'IA-1' where county_fips in ('19001', '19003')");
});

const keys = async () => {
	const { rows } = await owner.query<{ county: string; key: string | null; name: string | null }>(
		`select county_fips as county, district_key as key, d.name from directory.county
		left join directory.district d using (district_key) where county_fips in ('19001', '19003', '19005') order by 1`,
	);
	return Object.fromEntries(rows.map(({ county, key, name }) => [county, key === null ? null : { key, name }]));
};
const redraw = (names: Record<string, string>, seen: number, viewer = iowa) =>
	asDesk(viewer, (trx) =>
		redrawDistricts(trx, viewer, { stateFips: "19", names: new Map(Object.entries(names)), seen }),
	);
const forced = (text: string) => asDesk(wisconsin, (trx) => sql.raw(text).execute(trx));
const seenBy = (viewer: Associate) =>
	asDesk(viewer, (trx) => trx.selectFrom("directory.district_change").select("state_fips").execute());
const version = async () => (await asDesk(iowa, (trx) => findStateDistricts(trx, iowa, "19")))?.version ?? -1;

test("a district of the same counties keeps its key under a new name, one of others gets a new key", async () => {
	expect(await redraw({ "19001": "Far west", "19003": "Far west" }, 0)).toBe("redrawn");
	expect(await keys()).toMatchObject({
		"19001": { key: "IA-1", name: "Far west" },
		"19003": { key: "IA-1", name: "Far west" },
		"19005": null,
	});
	const all = { "19001": "Far west", "19003": "Far west", "19005": "Far west" };
	expect(await redraw(all, await version())).toBe("redrawn");
	const wide = (await keys())["19005"]!.key;
	expect(wide).not.toBe("IA-1");
	expect(wide).toMatch(/^IA-[0-9a-f]{8}$/);
	// The same counties another time are the same district again.
	expect(await redraw({}, await version())).toBe("redrawn");
	expect(await redraw(all, await version())).toBe("redrawn");
	expect((await keys())["19005"]!.key).toBe(wide);
});

test("a change is taken back, nothing changed is nothing done, and a change meanwhile is not written over", async () => {
	const names = { "19001": "West", "19003": "West" };
	expect(await redraw(names, 0)).toBe("unchanged");
	expect(await redraw({ ...names, "19005": "West" }, 0)).toBe("redrawn");
	expect(await redraw(names, 0)).toBe("changed_meanwhile");
	const seen = await version();
	expect(await asDesk(iowa, (trx) => undoRedrawing(trx, iowa, "19", seen))).toBe("redrawn");
	expect(await keys()).toMatchObject({ "19001": { name: "West" }, "19003": { name: "West" }, "19005": null });
});

test("another state's districts are not found, and the database refuses to write them", async () => {
	expect(await asDesk(wisconsin, (trx) => findStateDistricts(trx, wisconsin, "19"))).toBeUndefined();
	expect(await redraw({}, 0, wisconsin)).toBe("not_found");
	const result = await forced("update directory.county set district_key = null where state_fips = '19'");
	expect(Number(result.numAffectedRows ?? 0)).toBe(0);
	await expect(forced("insert into directory.district values ('IA-9', '19', 'Stolen')")).rejects.toThrow(
		/row-level security/,
	);
	expect(await keys()).toMatchObject({ "19001": { key: "IA-1" } });
	await redraw({}, 0);
	expect(await seenBy(iowa)).toEqual([{ state_fips: "19" }]);
	expect(await seenBy(wisconsin)).toEqual([]);
});

/** As the guard gives it: a desk with no state. */
const asCoordinator = <T>(work: (trx: Trx) => Promise<T>) => scopedTransaction({ kind: "desk", stateFips: [] }, work);

test("a coordinator groups the counties of any state, which the log tells", async () => {
	const names = new Map([
		["19001", "West"],
		["19003", "West"],
		["19005", "West"],
	]);
	const decided = { decision: "save", seen: 0, names } as const;
	expect(await asCoordinator((trx) => inState(trx, "19", () => carryOut(trx, coordinator, "19", decided)))).toBe(
		"redrawn",
	);
	expect(await keys()).toMatchObject({ "19005": { name: "West" } });
	const { rows } = await owner.query("select person_id, state_fips from log.event where action = 'district.redrawn'");
	expect(rows).toEqual([{ person_id: coordinator.personId, state_fips: "19" }]);
	const state = (await asCoordinator((trx) => listNetworkStates(trx, coordinator))).find(
		(one) => one.stateFips === "19",
	);
	const [seen] = (await owner.query("select max(district_change_id) as seen from directory.district_change")).rows;
	const undo = { decision: "undo", seen: seen.seen, names: new Map() } as const;
	expect(await asCoordinator((trx) => inState(trx, "19", () => carryOut(trx, coordinator, "19", undo)))).toBe(
		"redrawn",
	);
	expect(await keys()).toMatchObject({ "19005": null });
	expect(state).toMatchObject({ districts: 1, redrawnAt: expect.any(Date) });
});

test("a county of another state and a district of one county are refused", async () => {
	const state = (await asDesk(iowa, (trx) => findStateDistricts(trx, iowa, "19")))!;
	const typed = (district: Record<string, string>) => readTyped(state, { decision: "save", seen: 0, district });
	expect(typed({ "55001": "West" })).toBe("not_found");
	expect(typed({ "19001": "West", "19003": "" })).toMatchObject({
		problems: [{ field: "district.19001", code: "district_single" }],
	});
});

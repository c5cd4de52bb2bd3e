import { CompiledQuery, type Kysely, sql } from "kysely";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import { type Scope, setScope } from "#app/auth/scope.server.ts";
import { connect } from "#db/connect.ts";
import type { DB } from "#db/schema.ts";
import { connectOwner } from "#tests/database/surveys-fixture.ts";
import { createTestDatabase, type TestDatabase } from "#tests/helpers/database.ts";
import { fillWithHolders, type Holder, type Holders } from "./row-owners.ts";

type Write = "insert" | "update" | "delete";
/** Whose row it is (the column that tells; a state beside it, where one is kept), and what the application may do to rows that its scope reaches. */
type Guarded = {
	key: keyof Holder;
	/** Which row of several with that key. */
	only?: string;
	state?: "state_fips";
	/** Rows of other tables rest on it, which is what a delete that gets there runs into. */
	held?: true;
	/** What another state reads as in that column, where it holds several. */
	states?: "{55}";
	desk: Write[];
	grower: Write[] | "nothing";
	growerOnly?: true;
	/** The desk reads; the sums are written by the network's own work, and by triggers in its name. */
	deskReads?: true;
	/** Columns that may be written, where triggers keep others. */
	writes?: { insert: string; update: string };
	/** The network's own work alone, not even the desk of the row's state. */
	networkOnly?: true;
};

const write: Write[] = ["insert", "update"];
const all: Write[] = ["insert", "update", "delete"];

const guarded: Record<string, Guarded> = {
	// An owner stands before its first operation, so the desk may write one; growers only see their own.
	"directory.owner": { key: "owner_id", held: true, desk: all, grower: [] },
	"directory.operation": { key: "operation_id", held: true, state: "state_fips", desk: all, grower: write },
	"directory.planting": { key: "operation_id", desk: all, grower: write },
	// Where an orchard lies is its grower's alone to read.
	"directory.operation_pin": { key: "operation_id", desk: all, grower: all, growerOnly: true },
	"directory.merge": { key: "operation_id", desk: write, grower: write },
	"directory.distinct_pair": { key: "operation_id", desk: all, grower: all },
	// A file's rows can be of growers nobody knows yet: they are for whoever holds every state that its reader held.
	"directory.import": { key: "import_id", state: "state_fips", states: "{55}", desk: all, grower: "nothing" },
	"directory.import_row": { key: "operation_id", desk: all, grower: all },
	"collect.contact": { key: "operation_id", desk: all, grower: all },
	// What an associate is typing of a grower's answers goes with the grower who leaves, so the grower's scope reaches it.
	"collect.entry_draft": { key: "operation_id", desk: all, grower: all },
	"collect.late_decision": { key: "response_id", desk: ["insert"], grower: [] },
	"collect.frame_operation": {
		key: "operation_id",
		state: "state_fips",
		desk: write,
		grower: write,
		writes: {
			insert: "survey_id, operation_id, owner_id, county_fips, state_fips, size_class, stratum_key, disposition",
			update: "disposition",
		},
	},
	"collect.frame_crop": { key: "operation_id", desk: write, grower: write },
	"collect.mailing": { key: "operation_id", desk: write, grower: write },
	"collect.personal_link": { key: "operation_id", desk: write, grower: write },
	"collect.response": { key: "operation_id", state: "state_fips", desk: write, grower: write },
	"collect.answer": { key: "response_id", desk: all, grower: all },
	"collect.submission": { key: "response_id", desk: ["insert"], grower: ["insert"] },
	"collect.photo": { key: "response_id", desk: ["insert", "delete"], grower: ["insert", "delete"] },
	// What is odd and what was decided is written once; only words go when a grower leaves.
	"collect.edit_finding": { key: "response_id", desk: ["insert"], grower: ["insert"] },
	"collect.edit_finding_step": { key: "edit_finding_id", desk: ["insert"], grower: ["insert"] },
	"collect.edit_question": { key: "edit_finding_id", desk: ["insert"], grower: ["insert"] },
	"collect.correction": { key: "response_id", desk: ["insert"], grower: ["insert"] },
	"collect.fact": { key: "operation_id", state: "state_fips", desk: all, grower: all },
	"collect.tally": { key: "measure_key", state: "state_fips", desk: all, grower: "nothing", deskReads: true },
	"collect.word_told": { key: "response_id", state: "state_fips", desk: [], grower: "nothing", deskReads: true },
	// Of a stratum that nobody else is in, so that the count is this operation's alone.
	"collect.answered_count": {
		key: "stratum_key",
		only: "crop_key = 'all'",
		state: "state_fips",
		desk: [],
		grower: "nothing",
		deskReads: true,
	},
	"collect.frame_count": {
		key: "stratum_key",
		only: "crop_key = 'all'",
		state: "state_fips",
		desk: [],
		grower: "nothing",
		deskReads: true,
	},
	// A draft covers the network and holds figures of shown cells alone: every desk's, and no grower's.
	"collect.release_draft": { key: "release_draft_id", desk: write, grower: "nothing" },
	"collect.release_draft_cell": { key: "release_draft_id", desk: write, grower: "nothing" },
	// Answers of every state, as they were when a draft was made.
	"collect.release_draft_holding": { key: "owner_id", desk: ["insert"], grower: "nothing", networkOnly: true },
};

/** A survey is anybody's to read; its guard hides rehearsals from whoever has none in hand (`rehearsal.test.ts`). */
const rehearsalsApart = "collect.survey";

/** What runs with its owner's rights, and why that leads to no grower's row. */
const ownersRights: Record<string, string> = {
	"collect.count_answers": "a trigger, which answers nothing",
	"collect.count_frame_crop": "a trigger, which answers nothing",
	"collect.count_frame_operation": "a trigger, which answers nothing",
	"collect.discard_draft": "deletes a survey that was never opened, for a desk that holds all its states",
	"collect.discard_rehearsal": "deletes a rehearsal, for a desk that holds all its states",
	"collect.hidden_surveys": "ids of rehearsals, which the asker could not hide without knowing",
	"collect.keep_invited_delete": "a trigger, which answers nothing",
	"collect.keep_invited_insert": "a trigger, which answers nothing",
	"collect.keep_invited_update": "a trigger, which answers nothing",
	"collect.know_frames": "has the planner look at frames anew, and answers nothing",
	"collect.recount_moved_answers": "a trigger, which answers nothing",
	"collect.refuse_loss_of_states": "a trigger, which answers nothing",
	"collect.refuse_mixed_frame": "a trigger, which answers nothing",
	"collect.refuse_rehearsal": "a trigger, which answers nothing",
	"collect.rehearsal_of": "the id of a draft's rehearsal",
	"collect.tell_findings": "a trigger, which answers nothing",
	"collect.tell_words": "a trigger, which answers nothing",
	"collect.tell_words_of_survey": "a trigger, which answers nothing",
	"directory.know_operations": "has the planner look at the list anew, and answers nothing",
};

/** Tables of the two schemas that hold no row of a grower. */
const open: Record<string, string> = {
	"directory.state": "reference: the states covered",
	"directory.county_neighbor": "reference: which counties touch",
	"directory.crop": "reference: the crops",
	"directory.network_rules": "the network's settings, which every release tells",
	"directory.saved_view": "which filters an associate keeps, for that person's own pages",
	"collect.reminder": "when a survey's reminders go",
	"collect.survey_state": "which states a survey covers",
};

/** Tables of areas and questions, which hold no row of a grower either: read by all, written at the desks of their states. */
const guardedWrites: Record<string, string> = {
	"directory.district": "named groups of counties: tests/database/districts.test.ts",
	"directory.county": "every county, with its district: the same",
	"collect.survey_brief":
		"why a survey is asked: tests/database/survey-life.test.ts, read at the desks of its states alone",
	"directory.district_change":
		"how a state's counties were grouped before: the same, read at its desks, by a coordinator as there",
	"collect.form": "which forms there are: tests/database/forms-editor.test.ts",
	"collect.form_version": "questions, not answers: the same",
	"collect.form_draft": "questions being written, which growers do not see: the same",
};

const tables = Object.keys(guarded);
const ofTheNetwork = (table: string) => guarded[table]!.key === "release_draft_id";

let database: TestDatabase;
let owner: Awaited<ReturnType<typeof connectOwner>>;
let app: Kysely<DB>;
let holders: Holders;

beforeAll(async () => {
	database = await createTestDatabase();
	owner = await connectOwner(database.ownerUrl);
	holders = await fillWithHolders(owner);
	app = connect(database.appUrl, { max: 1 });
});
afterAll(async () => {
	await app.destroy();
	await owner.end();
	await database.drop();
});

/** Tries one statement as the application under a scope (null: none was ever set) and takes it back: rows, or the refusal's code. */
async function attempt(scope: Scope | null, query: string, values: unknown[], db = app): Promise<number | string> {
	const trx = await db.startTransaction().execute();
	try {
		if (scope) await setScope(trx, scope);
		const result = await trx.executeQuery(CompiledQuery.raw(query, values));
		return Number(result.numAffectedRows ?? result.rows.length);
	} catch (error) {
		return (error as { code: string }).code;
	} finally {
		await trx.rollback().execute();
	}
}

const refused = "42501";
const keyTaken = "23505";
const keyHeld = "23503";

/** What each kind of statement came to, on the row of one holder. The insert is of that very row, so its key is taken. */
async function attempts(scope: Scope | null, table: string, holder: Holder, db = app) {
	const { key, only = "true", writes } = guarded[table]!;
	const own = [holder[key]];
	const its = `${key} = $1 and ${only}`;
	const { rows } = await owner.query(`select to_jsonb(t) as row from ${table} t where ${its}`, own);
	expect(rows.length, `${table} holds the row`).toBe(1);
	const made = writes ? `(${writes.insert}) select ${writes.insert}` : "select *";
	const copy = `insert into ${table} ${made} from jsonb_populate_record(null::${table}, $1)`;
	const changed = writes?.update ?? key;
	return {
		select: await attempt(scope, `select 1 from ${table} where ${its}`, own, db),
		insert: await attempt(scope, copy, [rows[0].row], db),
		update: await attempt(scope, `update ${table} set ${changed} = ${changed} where ${its}`, own, db),
		delete: await attempt(scope, `delete from ${table} where ${its}`, own, db),
	};
}

/**
 * Reachable: seen, and written where granted. The taken key shows that an insert got as far as the table's own rules. What
 * a row's rules keep for the desk alone is not refused to others, it finds nothing.
 */
function reachable(table: string, may: Write[], granted = may) {
	const gone = guarded[table]!.held ? keyHeld : 1;
	return {
		select: 1,
		insert: may.includes("insert") ? keyTaken : refused,
		update: may.includes("update") ? 1 : refused,
		delete: may.includes("delete") ? gone : granted.includes("delete") ? 0 : refused,
	};
}

/** Out of reach: not there to see, change or take away, and not to be made. Where no right was granted, refused outright. */
function outOfReach(table: string) {
	const { desk } = guarded[table]!;
	return {
		select: 0,
		insert: refused,
		update: desk.includes("update") ? 0 : refused,
		delete: desk.includes("delete") ? 0 : refused,
	};
}

/** For a desk, a row of another state. An owner's own name may be written by any desk, as it stands before its operations. */
function beyondTheDesk(table: string) {
	if (ofTheNetwork(table)) return reachable(table, guarded[table]!.desk);
	return table === "directory.owner" ? { ...outOfReach(table), insert: keyTaken } : outOfReach(table);
}

describe("the catalogue", () => {
	test("every table of directory and collect is guarded by rows, or holds none of growers", async () => {
		const { rows } = await owner.query<{ name: string; guarded: boolean }>(
			`select n.nspname || '.' || c.relname as name, c.relrowsecurity as guarded
			from pg_class c join pg_namespace n on n.oid = c.relnamespace
			where n.nspname in ('directory', 'collect') and c.relkind in ('r', 'p') order by 1`,
		);
		const names = (held: boolean) => rows.filter((row) => row.guarded === held).map(({ name }) => name);
		expect(names(true)).toEqual([...tables, ...Object.keys(guardedWrites), rehearsalsApart].toSorted());
		expect(names(false)).toEqual(Object.keys(open).toSorted());
	});

	test("nothing leads around the rows' guards: no view, no other function with its owner's rights, no role above them", async () => {
		const ours = "('directory', 'collect', 'release', 'publish', 'readership', 'auth', 'log')";
		const views = `select relname from pg_class where relkind in ('v', 'm') and relnamespace::regnamespace::text in ${ours}`;
		const functions = `select distinct pronamespace::regnamespace || '.' || proname as name from pg_proc
			where prosecdef and pronamespace::regnamespace::text in ${ours} order by 1`;
		const roles = `select rolname from pg_roles where rolname in ('tallygrove_app', 'tallygrove_reader')
			and (rolsuper or rolbypassrls or rolcreaterole or pg_has_role(rolname, 'tallygrove_owner', 'member'))`;
		for (const query of [views, roles]) expect((await owner.query(query)).rows).toEqual([]);
		const named = (await owner.query<{ name: string }>(functions)).rows.map(({ name }) => name);
		expect(named).toEqual(Object.keys(ownersRights));
	});
});

describe.each(tables)("%s", (table) => {
	const { desk, grower, growerOnly, deskReads, networkOnly } = guarded[table]!;

	test("is out of reach while no scope was ever set, and under the scope of nothing", async () => {
		const fresh = connect(database.appUrl, { max: 1 });
		try {
			expect(await attempts(null, table, holders.iowa, fresh)).toEqual(outOfReach(table));
		} finally {
			await fresh.destroy();
		}
		expect(await attempts({ kind: "none" }, table, holders.iowa)).toEqual(outOfReach(table));
	});

	const atWork = growerOnly ? outOfReach(table) : reachable(table, desk);

	test(`lets the network's own work reach ${growerOnly ? "no" : "every"} row`, async () => {
		for (const holder of Object.values(holders)) {
			expect(await attempts({ kind: "network" }, table, holder)).toEqual(atWork);
		}
	});

	test(`lets a desk reach ${growerOnly || networkOnly ? "no row, in its states or others" : "the rows of its states and no others"}`, async () => {
		const iowa: Scope = { kind: "desk", stateFips: ["19"] };
		const hidden = networkOnly ? outOfReach(table) : atWork;
		const atTheDesk = deskReads ? { ...outOfReach(table), select: 1 } : hidden;
		expect(await attempts(iowa, table, holders.iowa)).toEqual(atTheDesk);
		expect(await attempts(iowa, table, holders.neighbor)).toEqual(atTheDesk);
		expect(await attempts(iowa, table, holders.wisconsin)).toEqual(beyondTheDesk(table));
		expect(await attempts({ kind: "desk", stateFips: [] }, table, holders.iowa)).toEqual(beyondTheDesk(table));
	});

	test("lets a grower reach the rows of their own operations and no others", async () => {
		const own: Scope = { kind: "grower", operationIds: [holders.iowa.operation_id] };
		const expected = grower === "nothing" ? outOfReach(table) : reachable(table, grower, desk);
		expect(await attempts(own, table, holders.iowa)).toEqual(expected);
		expect(await attempts(own, table, holders.neighbor)).toEqual(outOfReach(table));
		expect(await attempts(own, table, holders.wisconsin)).toEqual(outOfReach(table));
		expect(await attempts({ kind: "grower", operationIds: [] }, table, holders.iowa)).toEqual(outOfReach(table));
	});
});

test.each(tables.filter((table) => !ofTheNetwork(table)))(
	"a row of %s cannot be handed to whom the scope does not reach",
	async (table) => {
		const { key, state, states, desk: may, grower: reach, growerOnly, deskReads } = guarded[table]!;
		const hand = (scope: Scope, column: string, to: unknown) =>
			attempt(scope, `update ${table} set ${column} = $2 where ${key} = $1`, [holders.iowa[key], to]);
		const desk: Scope = { kind: "desk", stateFips: ["19"] };
		expect(await hand(desk, state ?? key, state ? (states ?? "55") : holders.wisconsin[key])).toBe(
			growerOnly || (deskReads && may.includes("update")) ? 0 : refused,
		);
		const grower: Scope = { kind: "grower", operationIds: [holders.iowa.operation_id] };
		expect(await hand(grower, key, holders.neighbor[key])).toBe(
			reach === "nothing" && may.includes("update") ? 0 : refused,
		);
	},
);

test("a scope ends with its transaction, kept or taken back, on the one connection of the pool", async () => {
	const seen = sql<{ pid: number; rows: number; scope: string }>`select pg_backend_pid() as pid,
		(select count(*)::int from directory.operation) as rows, auth.scope() as scope`;
	const withScope = await app.transaction().execute(async (trx) => {
		await setScope(trx, { kind: "network" });
		return (await seen.execute(trx)).rows[0]!;
	});
	expect(withScope).toMatchObject({ rows: 3, scope: "network" });
	const after = { pid: withScope.pid, rows: 0, scope: "" };
	expect((await seen.execute(app)).rows).toEqual([after]);

	const failing = app.transaction().execute(async (trx) => {
		await setScope(trx, { kind: "desk", stateFips: ["19"] });
		expect((await seen.execute(trx)).rows[0]).toMatchObject({ pid: withScope.pid, rows: 2, scope: "desk" });
		await sql`select 1 / 0`.execute(trx);
	});
	await expect(failing).rejects.toMatchObject({ code: "22012" });
	expect((await seen.execute(app)).rows).toEqual([after]);
	await app.transaction().execute(async (trx) => expect((await seen.execute(trx)).rows).toEqual([after]));
});

describe("a state that is only claimed", () => {
	test.each(["collect.response", "collect.fact"])(
		"%s of another state's operation is not written under the desk's own state",
		async (table) => {
			const { rows } = await owner.query(`select to_jsonb(t) as row from ${table} t where operation_id = $1`, [
				holders.wisconsin.operation_id,
			]);
			const claimed = { ...rows[0].row, state_fips: "19", response_id: crypto.randomUUID() };
			const copy = `insert into ${table} select * from jsonb_populate_record(null::${table}, $1)`;
			expect(await attempt({ kind: "desk", stateFips: ["19"] }, copy, [claimed])).toBe(refused);
			expect(await attempt({ kind: "network" }, copy, [claimed])).toBe(refused);
			expect(await attempt({ kind: "network" }, copy, [{ ...claimed, state_fips: "55" }])).toBe(keyTaken);
		},
	);
});

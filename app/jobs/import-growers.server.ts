import { logEvent } from "#app/auth/event-log.server.ts";
import { scopedTransaction, setScope, type Trx } from "#app/auth/scope.server.ts";
import { parseTypedNumber } from "#app/collect/typed-number.ts";
import { checkRows } from "#app/directory/import/check-rows.ts";
import { countRows, readRows, writeChecked, writeRows } from "#app/directory/import/import-rows.server.ts";
import {
	clearOldImports,
	endStep,
	grantedStates,
	listExisting,
	listPlaces,
	noteProgress,
	noteUndone,
	takeImport,
} from "#app/directory/import/import-work.server.ts";
import type { ImportFailure, ImportStatus } from "#app/directory/import/imports.server.ts";
import { placeFinder } from "#app/directory/import/places.ts";
import { readSheet } from "#app/directory/import/read-file.server.ts";
import { type Progress, writeImport } from "#app/directory/import/run-import.server.ts";
import { listInTheWay, removeOwners, takeBack } from "#app/directory/import/undo-import.server.ts";
import { log } from "#app/lib/log.server.ts";

export type ImportStep = "read" | "check" | "write" | "undo";
type Work = (trx: Trx, importId: string, taken: Taken) => Promise<ImportFailure | undefined>;
type Taken = NonNullable<Awaited<ReturnType<typeof takeImport>>>;

/** What each step waits for, what it does, and where an import stands when it comes to nothing. */
const steps: Record<ImportStep, { from: ImportStatus; work: Work; back: ImportStatus }> = {
	read: { from: "reading", work: readFile, back: "reading" },
	check: { from: "checking", work: check, back: "columns" },
	write: { from: "importing", work: write, back: "checked" },
	undo: { from: "undoing", work: undo, back: "imported" },
};

/** A step that fails leaves no trace of itself but the reason, which the page shows. */
class Stopped extends Error {
	constructor(readonly failure: ImportFailure) {
		super(failure.why);
	}
}

/** Does one step of an import, all of it or nothing. A step that is done, or was given up, is no work. */
export async function importGrowers({ importId, step }: { importId: string; step: ImportStep }, lastTry: boolean) {
	const { from, work, back } = steps[step];
	try {
		await scopedTransaction({ kind: "network" }, async (trx) => {
			const taken = await takeImport(trx, importId, from);
			const failure = taken && (await work(trx, importId, taken));
			if (failure) throw new Stopped(failure);
		});
	} catch (error) {
		if (!(error instanceof Stopped) && !lastTry) throw error;
		if (!(error instanceof Stopped)) log.error({ err: error, importId, step }, "an import broke off");
		const failure: ImportFailure = error instanceof Stopped ? error.failure : { why: "broke_off" };
		await scopedTransaction({ kind: "network" }, (trx) => endStep(trx, importId, { status: back, failure }));
	}
}

async function readFile(trx: Trx, importId: string, { file }: Taken): Promise<ImportFailure | undefined> {
	const sheet = await readSheet(file as Buffer);
	if (typeof sheet === "string") return { why: sheet };
	await writeRows(trx, importId, sheet.rows);
	await endStep(trx, importId, { status: "columns", header: sheet.header });
	return undefined;
}

async function check(trx: Trx, importId: string, { choices, stateFips }: Taken): Promise<ImportFailure | undefined> {
	const rows = await readRows(trx, importId);
	const findPlace = placeFinder(await listPlaces(trx, stateFips));
	const reader = { choices: choices!, findPlace, readNumber: parseTypedNumber };
	await writeChecked(trx, importId, checkRows(rows, await listExisting(trx, stateFips), reader));
	await endStep(trx, importId, { status: "checked", counts: await countRows(trx, importId) });
	return undefined;
}

async function write(trx: Trx, importId: string, taken: Taken): Promise<ImportFailure | undefined> {
	if (!(await underGrants(trx, taken))) return { why: "states_changed" };
	const written = await writeImport(trx, importId, taken.choices!, progressOf(importId));
	if (written === "list_changed") return { why: "list_changed" };
	const growers = written.made + written.changed;
	await endStep(trx, importId, { status: "imported", counts: { ...(await countRows(trx, importId)), ...written } });
	const { personId } = taken;
	const subject = { subjectKind: "import", subjectId: importId };
	await logEvent(trx, { personId, action: "import.finished", ...subject, detail: { growers } });
	return undefined;
}

async function undo(trx: Trx, importId: string, taken: Taken): Promise<ImportFailure | undefined> {
	// Grants are no matter of a desk's scope: what rests on the import is asked over the whole network.
	const names = await listInTheWay(trx, importId);
	if (names.length > 0) return { why: "rests_on_it", names: names.slice(0, 5), count: names.length };
	if (!(await underGrants(trx, taken))) return { why: "states_changed" };
	const { ownerIds, count } = await takeBack(trx, importId, progressOf(importId));
	await setScope(trx, { kind: "network" });
	await removeOwners(trx, ownerIds);
	await noteUndone(trx, importId, taken.personId);
	const subject = { subjectKind: "import", subjectId: importId };
	await logEvent(trx, { personId: taken.personId, action: "import.undone", ...subject, detail: { growers: count } });
	return undefined;
}

/** From here on the work sees and writes what its associate may, if they still hold all states that the file was read for. */
async function underGrants(trx: Trx, { personId, stateFips }: Taken): Promise<boolean> {
	const granted = await grantedStates(trx, personId);
	if (!stateFips.every((state) => granted.includes(state))) return false;
	await setScope(trx, { kind: "desk", stateFips });
	return true;
}

/** Progress is told beside the work's own transaction, as nobody would see it before its end. */
const progressOf =
	(importId: string): Progress =>
	(done, total) =>
		scopedTransaction({ kind: "network" }, (trx) => noteProgress(trx, importId, done, total));

/** A file that nobody went on with, and the rows of one that was imported long ago. */
const days = { unfinished: 7, finished: 30 };

/** Clears away what old imports left. */
export async function sweepImports(): Promise<void> {
	const cleared = await scopedTransaction({ kind: "network" }, (trx) => clearOldImports(trx, days));
	if (cleared > 0) log.info({ cleared }, "old imports cleared");
}

import { createHash } from "node:crypto";
import { sql } from "kysely";
import { logEvent } from "#app/auth/event-log.server.ts";
import { type Trx, underScope } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import type { Words } from "#app/lib/words.ts";
import { FormDefinition } from "../form.ts";
import { type ReadyFormKey, readyFormKeys, readyForms } from "../forms/ready-forms.ts";
import { isId } from "../surveys.server.ts";
import { canonical, isSame } from "./canonical.ts";
import { blankDraft, draftOfDefinition, type FormDraft } from "./draft.ts";
import type { Held, NotMade } from "./edit-screens.ts";
import { newFormKey } from "./new-key.ts";

/** A form as the desk reads it. One that ships with the product has no row of its own until a survey asks it. */
export type DeskForm = {
	/** The form's id, or the key of a ready form. */
	formId: string;
	draft: FormDraft;
	/** Whether the viewer may change it; everybody may read and copy it. */
	mayEdit: boolean;
	makerName: string | null;
	stateFips: string[];
	edit: number;
	editedBy: string | null;
	editedAt: Date | null;
	/** As it was before the last change, if there was one. */
	before: FormDraft | null;
	/** The newest version, which surveys take. */
	published: { version: number; definition: FormDefinition } | null;
	held: string[];
};

/**
 * A form to read, or to change where the viewer may. Forms belong to the states that their maker held when making them, and
 * whoever is granted one of these may change them: a colleague goes on when its maker is away, and no other state's
 * associate changes questions under somebody's survey.
 */
export async function findDeskForm(trx: Trx, viewer: Associate, formId: string): Promise<DeskForm | undefined> {
	if (isReadyKey(formId)) return readyDeskForm(formId);
	if (!isId(formId)) return undefined;
	const row = await selectDrafts(trx).where("f.form_id", "=", formId).executeTakeFirst();
	return row && toDeskForm(trx, viewer, row);
}

export function isReadyKey(key: string): key is ReadyFormKey {
	return (readyFormKeys as string[]).includes(key);
}

function readyDeskForm(key: ReadyFormKey): DeskForm {
	const definition = readyForms[key];
	return {
		formId: key,
		draft: draftOfDefinition(definition),
		mayEdit: false,
		makerName: null,
		stateFips: [],
		edit: 0,
		editedBy: null,
		editedAt: null,
		before: null,
		published: null,
		held: [],
	};
}

function selectDrafts(trx: Trx) {
	return trx
		.selectFrom("collect.form_draft as d")
		.innerJoin("collect.form as f", "f.form_id", "d.form_id")
		.leftJoin("auth.person as maker", "maker.person_id", "f.made_by")
		.leftJoin("auth.person as editor", "editor.person_id", "d.edited_by")
		.select([
			"f.form_id",
			"f.state_fips",
			"maker.display_name as maker_name",
			"editor.display_name as editor_name",
			"d.draft",
			"d.before",
			"d.edit",
			"d.edited_at",
		]);
}
type DraftRow = NonNullable<Awaited<ReturnType<ReturnType<typeof selectDrafts>["executeTakeFirst"]>>>;

async function toDeskForm(trx: Trx, viewer: Associate, row: DraftRow): Promise<DeskForm> {
	const newest = await findNewestVersion(trx, row.form_id);
	return {
		formId: row.form_id,
		// Written by the functions of this folder alone, which take and give drafts.
		draft: row.draft as FormDraft,
		before: row.before as FormDraft | null,
		mayEdit: sharesState(viewer, row.state_fips),
		makerName: row.maker_name,
		stateFips: row.state_fips,
		edit: row.edit,
		editedBy: row.editor_name,
		editedAt: row.edited_at,
		published: newest ?? null,
		held: [...(await listHeld(trx, row.form_id))],
	};
}

export function sharesState(viewer: Associate, stateFips: string[]): boolean {
	return stateFips.some((state) => viewer.stateFips.includes(state));
}

export async function findNewestVersion(trx: Trx, formId: string) {
	const row = await trx
		.selectFrom("collect.form_version")
		.select(["version", "definition"])
		.where("form_id", "=", formId)
		.orderBy("version", "desc")
		.limit(1)
		.executeTakeFirst();
	return row && { version: row.version, definition: FormDefinition.parse(row.definition) };
}

/** The questions of a form that somebody has answered, in whichever state: which ones, and nothing of the answers. */
async function listHeld(trx: Trx, formId: string): Promise<Held> {
	const rows = await underScope(trx, { kind: "network" }, () =>
		trx
			.selectFrom("collect.form_version as v")
			.innerJoin("collect.survey as s", "s.form_version_id", "v.form_version_id")
			.innerJoin("collect.response as r", "r.survey_id", "s.survey_id")
			.innerJoin("collect.answer as a", "a.response_id", "r.response_id")
			.select("a.question_key")
			.distinct()
			.where("v.form_id", "=", formId)
			.execute(),
	);
	return new Set(rows.map(({ question_key }) => question_key));
}

/** Begins a form: blank, or as a copy of any form that there is. @returns its id. */
export async function createForm(
	trx: Trx,
	viewer: Associate,
	title: Words,
	from?: string,
): Promise<string | "not_found"> {
	const source = from === undefined ? undefined : await findDeskForm(trx, viewer, from);
	if (from !== undefined && !source) return "not_found";
	const taken = await trx.selectFrom("collect.form").select("form_key").execute();
	const key = newFormKey(title.en || title.es, [...readyFormKeys, ...taken.map(({ form_key }) => form_key)]);
	const draft = source ? { ...source.draft, key, title } : blankDraft(key, title);
	const { form_id } = await trx
		.insertInto("collect.form")
		.values({ form_key: key, made_by: viewer.personId, state_fips: viewer.stateFips })
		.returning("form_id")
		.executeTakeFirstOrThrow();
	await trx
		.insertInto("collect.form_draft")
		.values({ form_id, draft: JSON.stringify(draft), edited_by: viewer.personId })
		.execute();
	await logEvent(trx, {
		personId: viewer.personId,
		action: "form.created",
		subjectKind: "form",
		subjectId: form_id,
		detail: { from: from ?? null },
	});
	return form_id;
}

export type Refused = NotMade | "changed_meanwhile";
export type Change = (draft: FormDraft, held: Held) => FormDraft | { draft: FormDraft; key: string } | Refused;
/** `key` is that of what was added, where something was. */
export type Changed = { outcome: "changed" | "unchanged"; key?: string };

/** Makes one change to a draft as it now stands, whole or not at all; changes made at once come after each other. */
export async function changeForm(
	trx: Trx,
	viewer: Associate,
	formId: string,
	change: Change,
): Promise<Changed | Refused> {
	const row = await lockDraft(trx, viewer, formId);
	if (!row) return "not_found";
	const made = change(row.draft, await listHeld(trx, formId));
	if (typeof made === "string") return made;
	const { draft, key } = "draft" in made ? made : { draft: made, key: undefined };
	if (isSame(draft, row.draft)) return { outcome: "unchanged", key };
	await writeDraft(trx, viewer, formId, draft, row.draft);
	return { outcome: "changed", key };
}

/** Puts back what was before the last change; once more, and the change is there again. */
export async function undoChange(
	trx: Trx,
	viewer: Associate,
	formId: string,
	edit: number,
): Promise<"undone" | "not_found" | "changed_meanwhile" | "nothing_to_undo"> {
	const row = await lockDraft(trx, viewer, formId);
	if (!row) return "not_found";
	if (row.edit !== edit) return "changed_meanwhile";
	if (!row.before) return "nothing_to_undo";
	await writeDraft(trx, viewer, formId, row.before, row.draft);
	return "undone";
}

async function lockDraft(trx: Trx, viewer: Associate, formId: string) {
	if (!isId(formId)) return undefined;
	const row = await trx
		.selectFrom("collect.form_draft as d")
		.innerJoin("collect.form as f", "f.form_id", "d.form_id")
		.select(["d.draft", "d.before", "d.edit", "f.state_fips"])
		.where("d.form_id", "=", formId)
		.forUpdate("d")
		.executeTakeFirst();
	if (!row || !sharesState(viewer, row.state_fips)) return undefined;
	return { draft: row.draft as FormDraft, before: row.before as FormDraft | null, edit: row.edit };
}

async function writeDraft(trx: Trx, viewer: Associate, formId: string, draft: FormDraft, before: FormDraft) {
	await trx
		.updateTable("collect.form_draft")
		.set({
			draft: JSON.stringify(draft),
			before: JSON.stringify(before),
			edit: sql`edit + 1`,
			edited_by: viewer.personId,
			edited_at: sql`now()`,
		})
		.where("form_id", "=", formId)
		.execute();
}

/** Takes away a form that was never published; what a survey may have asked stays. */
export async function dropForm(trx: Trx, viewer: Associate, formId: string) {
	const row = await lockDraft(trx, viewer, formId);
	if (!row) return "not_found" as const;
	if (await findNewestVersion(trx, formId)) return "published" as const;
	await trx.deleteFrom("collect.form").where("form_id", "=", formId).execute();
	await logEvent(trx, {
		personId: viewer.personId,
		action: "form.dropped",
		subjectKind: "form",
		subjectId: formId,
		detail: { form: row.draft.key },
	});
	return "dropped" as const;
}

/** Names what a page has shown of a part, so that a change upon something older is noticed. */
export function fingerprintOf(part: unknown): string {
	return createHash("sha256").update(canonical(part)).digest("base64url").slice(0, 16);
}

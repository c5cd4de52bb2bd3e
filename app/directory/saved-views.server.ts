import { sql } from "kysely";
import { z } from "zod";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { OperationQuery, queryParts } from "./operation.schema.ts";

/** More would be no list to choose from. */
const mostViews = 30;

export type SavedView = { savedViewId: string; name: string; parts: Record<string, string> };

/** A person's own views of the list of growers, by name. */
export async function listSavedViews(trx: Trx, viewer: Associate): Promise<SavedView[]> {
	const rows = await trx
		.selectFrom("directory.saved_view")
		.select(["saved_view_id", "name", "query"])
		.where("person_id", "=", viewer.personId)
		.orderBy(sql`lower(name)`)
		.orderBy("saved_view_id")
		.execute();
	// Read anew, so that a filter that is no more falls away.
	return rows.map(({ saved_view_id, name, query }) => ({
		savedViewId: saved_view_id,
		name,
		parts: queryParts(OperationQuery.parse(query)),
	}));
}

/** Keeps a view under a name; a name that is taken keeps the new one. */
export async function saveView(
	trx: Trx,
	viewer: Associate,
	{ name, query }: { name: string; query: OperationQuery },
): Promise<"saved" | "too_many"> {
	const views = await listSavedViews(trx, viewer);
	if (views.length >= mostViews && !views.some((view) => view.name === name)) return "too_many";
	const kept = JSON.stringify(queryParts(query));
	await trx
		.insertInto("directory.saved_view")
		.values({ person_id: viewer.personId, name, query: kept })
		.onConflict((conflict) =>
			conflict.constraint("saved_view_name_once").doUpdateSet({ query: kept, saved_at: sql`now()` }),
		)
		.execute();
	return "saved";
}

/** Gives a view of the person's own another name, which none of the others has. */
export async function renameView(
	trx: Trx,
	viewer: Associate,
	{ savedViewId, name }: { savedViewId: string; name: string },
): Promise<"renamed" | "not_found" | "name_taken"> {
	const views = await listSavedViews(trx, viewer);
	if (!views.some((view) => view.savedViewId === savedViewId)) return "not_found";
	if (views.some((view) => view.name === name && view.savedViewId !== savedViewId)) return "name_taken";
	await trx
		.updateTable("directory.saved_view")
		.set({ name })
		.where("saved_view_id", "=", savedViewId)
		.where("person_id", "=", viewer.personId)
		.execute();
	return "renamed";
}

/** Takes away a view of the person's own. One that is gone, or somebody else's, changes nothing. */
export async function dropView(trx: Trx, viewer: Associate, savedViewId: string): Promise<void> {
	if (!z.guid().safeParse(savedViewId).success) return;
	await trx
		.deleteFrom("directory.saved_view")
		.where("saved_view_id", "=", savedViewId)
		.where("person_id", "=", viewer.personId)
		.execute();
}

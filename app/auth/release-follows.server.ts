import { z } from "zod";
import { scopedTransaction, type Trx } from "./scope.server.ts";
import type { Person, Researcher } from "./viewer.ts";

/** What a researcher does about a release: all editions of a survey's figures are followed as one. */
export const FollowForm = z.object({
	seriesId: z.uuid("wrong"),
	intent: z.enum(["follow", "unfollow"], "wrong"),
	/** The page that it was done on: a release's, or the data room. */
	release: z.coerce.number().int().positive().max(2_147_483_647).optional(),
});

/** Follows a series of releases. Twice is harmless. */
export function followSeries(researcher: Researcher, seriesId: string): Promise<void> {
	return scopedTransaction({ kind: "none" }, async (trx) => {
		await trx
			.insertInto("auth.release_follow")
			.values({ person_id: researcher.personId, series_id: seriesId })
			.onConflict((conflict) => conflict.constraint("release_follow_once").doNothing())
			.execute();
	});
}

export function unfollowSeries(person: Person, seriesId: string): Promise<void> {
	return scopedTransaction({ kind: "none" }, async (trx) => {
		await trx
			.deleteFrom("auth.release_follow")
			.where("person_id", "=", person.personId)
			.where("series_id", "=", seriesId)
			.execute();
	});
}

/** The series that a person follows. */
export function listFollowed(person: Person): Promise<string[]> {
	return scopedTransaction({ kind: "none" }, async (trx) => {
		const rows = await trx
			.selectFrom("auth.release_follow")
			.select("series_id")
			.where("person_id", "=", person.personId)
			.execute();
		return rows.map((row) => row.series_id);
	});
}

// What a mail's own link does: its token stands for one follow.

export type Follow = { followId: string; language: "en" | "es" };

export async function findFollow(trx: Trx, followId: string): Promise<Follow | undefined> {
	const row = await trx
		.selectFrom("auth.release_follow as f")
		.innerJoin("auth.person as p", "p.person_id", "f.person_id")
		.select(["f.release_follow_id", "p.language"])
		.where("f.release_follow_id", "=", followId)
		.executeTakeFirst();
	return row && { followId: row.release_follow_id, language: row.language === "es" ? "es" : "en" };
}

/** Ends a follow with all notes of what was sent for it. Twice is harmless. */
export async function endFollow(trx: Trx, followId: string): Promise<void> {
	await trx.deleteFrom("auth.release_follow").where("release_follow_id", "=", followId).execute();
}

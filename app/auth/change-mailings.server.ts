import { sql } from "kysely";
import type { Trx } from "./scope.server.ts";

export const releaseChanges = ["revised", "withdrawn"] as const;
/** What became of a release that its followers are told. */
export type ReleaseChange = (typeof releaseChanges)[number];
/** One mail to one follower about one change. */
export type ChangeKey = { followId: string; releaseId: string; change: ReleaseChange };
export type ChangeMailing = { email: string; language: "en" | "es"; triedAt: Date | null };

/** Notes one mailing for each follower of a series that has none of this change. @returns the new ones' follows. */
export async function addChangeMailings(
	trx: Trx,
	{ releaseId, seriesId, change }: Omit<ChangeKey, "followId"> & { seriesId: string },
): Promise<string[]> {
	const { rows } = await sql<{ release_follow_id: string }>`
		insert into auth.change_mailing (release_follow_id, release_id, change)
		select f.release_follow_id, ${releaseId}, ${change} from auth.release_follow f
			join auth.person p using (person_id)
		where f.series_id = ${seriesId} and p.email is not null and p.forgotten_at is null
		order by 1 on conflict do nothing returning release_follow_id`.execute(trx);
	return rows.map((row) => row.release_follow_id);
}

/** A mailing that is still to be sent; nothing where it was, or where nobody follows any more. */
export async function findChangeMailing(trx: Trx, key: ChangeKey): Promise<ChangeMailing | undefined> {
	const row = await trx
		.selectFrom("auth.change_mailing as m")
		.innerJoin("auth.release_follow as f", "f.release_follow_id", "m.release_follow_id")
		.innerJoin("auth.person as p", "p.person_id", "f.person_id")
		.select(["p.email", "p.language", "m.tried_at"])
		.where("m.release_follow_id", "=", key.followId)
		.where("m.release_id", "=", key.releaseId)
		.where("m.change", "=", key.change)
		.where("m.sent_at", "is", null)
		.where("m.failed_as", "is", null)
		.where("p.forgotten_at", "is", null)
		.executeTakeFirst();
	if (!row?.email) return undefined;
	return { email: row.email, language: row.language === "es" ? "es" : "en", triedAt: row.tried_at };
}

type State = { tried?: boolean; sent?: true; failed?: "returned" | "uncertain" | "server_away" };

export async function markChangeMailing(trx: Trx, key: ChangeKey, { tried, sent, failed }: State): Promise<void> {
	await trx
		.updateTable("auth.change_mailing")
		.set({
			...(tried !== undefined && { tried_at: tried ? sql`now()` : null }),
			...(sent && { sent_at: sql`now()` }),
			...(failed && { failed_as: failed }),
		})
		.where("release_follow_id", "=", key.followId)
		.where("release_id", "=", key.releaseId)
		.where("change", "=", key.change)
		.execute();
}

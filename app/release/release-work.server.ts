import { sql } from "kysely";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { Words } from "#app/lib/words.ts";

/** What is still to do for a release: `none` has no draft yet, the others are the newest draft's own status. */
export type ReleaseWork = "none" | "failed" | "audit_failed" | "audited" | "rejected";
/** A draft that was stopped is as none. */
const work = sql<ReleaseWork>`coalesce(nullif(newest.status, 'cancelled'), 'none')`;

/** Closed surveys of the viewer's states whose release waits for somebody, newest season first. */
export async function listReleaseWork(trx: Trx, viewer: Associate) {
	const rows = await trx
		.selectFrom("collect.survey as s")
		.leftJoinLateral(
			(eb) =>
				eb
					.selectFrom("collect.release_draft as d")
					.select("d.status")
					.whereRef("d.survey_id", "=", "s.survey_id")
					.orderBy("d.drafted_at", "desc")
					.limit(1)
					.as("newest"),
			(join) => join.onTrue(),
		)
		.where("s.survey_id", "in", (eb) =>
			eb.selectFrom("collect.survey_state as g").select("g.survey_id").where("g.state_fips", "in", viewer.stateFips),
		)
		.where("s.opened_at", "is not", null)
		.where(sql<boolean>`(s.closed_at is not null or s.closes_at <= now())`)
		.where(sql<boolean>`${work} in ('none', 'failed', 'audit_failed', 'audited', 'rejected')`)
		.select(["s.survey_id", "s.season", "s.title", work.as("work")])
		.orderBy("s.season", "desc")
		.orderBy("s.created_at", "desc")
		.execute();
	return rows.map((row) => ({
		surveyId: row.survey_id,
		season: row.season,
		title: Words.parse(row.title),
		work: row.work,
	}));
}

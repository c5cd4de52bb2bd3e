import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import type { Words } from "./form.ts";

/** The surveys of the season bar: names and state only, as it stands on every page of the desk. Newest season first. */
export async function listBarSurveys(trx: Trx, viewer: Associate) {
	const rows = await trx
		.selectFrom("collect.survey as s")
		.where("s.survey_id", "in", (eb) =>
			eb.selectFrom("collect.survey_state as g").select("g.survey_id").where("g.state_fips", "in", viewer.stateFips),
		)
		.where("s.archived_at", "is", null)
		.select(["s.survey_id", "s.season", "s.title", "s.opened_at", "s.closed_at", "s.closes_at", "s.rehearsal_of"])
		.orderBy("s.season", "desc")
		.orderBy("s.created_at", "desc")
		.orderBy("s.survey_id")
		.execute();
	return rows.map((row) => ({
		surveyId: row.survey_id,
		season: row.season,
		title: row.title as Words,
		state: barState(row, new Date()),
		isRehearsal: row.rehearsal_of !== null,
	}));
}

type Times = { opened_at: Date | null; closed_at: Date | null; closes_at: Date };

function barState({ opened_at, closed_at, closes_at }: Times, now: Date): "draft" | "open" | "closed" {
	if (!opened_at) return "draft";
	return closed_at || closes_at <= now ? "closed" : "open";
}

import { sql } from "kysely";
import { z } from "zod";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { type Brief, type PlannedFigure, plannedLevels } from "./brief.ts";
import { findSurvey } from "./surveys.server.ts";

const Planned = z.array(
	z.object({
		measureKey: z.string(),
		cropKey: z.string(),
		level: z.enum(plannedLevels),
		smallestN: z.number().nullable(),
		largestCv: z.number().nullable(),
	}),
);

/** A survey's brief; one that nobody has written yet is empty. undefined for a survey that is not the viewer's. */
export async function findBrief(trx: Trx, viewer: Associate, surveyId: string): Promise<Brief | undefined> {
	if (!(await findSurvey(trx, viewer, surveyId))) return undefined;
	const row = await trx
		.selectFrom("collect.survey_brief")
		.select(["why", "asked_by", "decision", "planned", "version"])
		.where("survey_id", "=", surveyId)
		.executeTakeFirst();
	if (!row) return { why: "", askedBy: "", decision: "", planned: [], version: 0 };
	return {
		why: row.why,
		askedBy: row.asked_by,
		decision: row.decision,
		planned: Planned.parse(row.planned),
		version: row.version,
	};
}

/**
 * Writes a survey's brief.
 * @param brief with the version that was shown when it was typed: a newer one is not written over.
 */
export async function saveBrief(trx: Trx, viewer: Associate, surveyId: string, brief: Brief) {
	const survey = await findSurvey(trx, viewer, surveyId);
	if (!survey) return "not_found" as const;
	const values = {
		why: brief.why,
		asked_by: brief.askedBy,
		decision: brief.decision,
		planned: JSON.stringify(brief.planned satisfies PlannedFigure[]),
		written_by: viewer.personId,
	};
	const made = await trx
		.insertInto("collect.survey_brief")
		.values({ survey_id: surveyId, ...values })
		.onConflict((conflict) =>
			conflict
				.column("survey_id")
				.doUpdateSet({ ...values, version: sql`survey_brief.version + 1`, written_at: sql`now()` })
				.where("collect.survey_brief.version", "=", brief.version),
		)
		.returning("version")
		.executeTakeFirst();
	// A first writing that another has been quicker with is a conflict too.
	return made ? ("saved" as const) : ("changed_meanwhile" as const);
}

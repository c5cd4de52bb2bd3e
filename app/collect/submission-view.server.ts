import { sql } from "kysely";
import type { Trx } from "#app/auth/scope.server.ts";
import { type AnswerGroup, listAnswerLines } from "./answer-lines.ts";
import type { Submission } from "./answer-rows.server.ts";
import type { FormDefinition } from "./form.ts";
import { withoutErased } from "./photo-rows.server.ts";
import type { PlantingAsked } from "./steps.ts";

export type SubmissionSeen = {
	version: number;
	submittedAt: Date;
	late: boolean;
	withdrawnAt: Date | null;
	mode: "web" | "telephone" | "paper";
	/** Who typed it in, where the grower did not. */
	enteredBy: string | null;
};

export type SubmissionsView = {
	/** Each time the answers were sent in, newest first. */
	submissions: SubmissionSeen[];
	/** Which of them the groups tell of; null where none was sent in. */
	shownVersion: number | null;
	groups: AnswerGroup[];
};

/**
 * What was sent in for a response, which the caller has narrowed to its viewer, and one of the times question by question.
 * @param wanted the version to show; without it, or where there is no such, the newest. `withdrawn`: whether to tell of
 *   what the grower took back, which nobody else reads.
 */
export async function viewSubmissions(
	trx: Trx,
	definition: FormDefinition,
	responseId: string,
	wanted: { version?: number; withdrawn: boolean },
): Promise<SubmissionsView> {
	const submissions = await trx
		.selectFrom("collect.submission as b")
		.leftJoin("auth.person as p", "p.person_id", "b.entered_by")
		.select(["b.version", "b.submitted_at as submittedAt", "b.late", "b.withdrawn_at as withdrawnAt"])
		.select([sql<SubmissionSeen["mode"]>`b.mode`.as("mode"), "p.display_name as enteredBy"])
		.where("b.response_id", "=", responseId)
		.$if(!wanted.withdrawn, (rows) => rows.where("b.withdrawn_at", "is", null))
		.orderBy("b.version", "desc")
		.execute();
	const shown = submissions.find(({ version }) => version === wanted.version) ?? submissions[0];
	const submission = shown && (await getSubmission(trx, responseId, shown.version));
	const view = { submissions, shownVersion: shown?.version ?? null };
	if (!submission) return { ...view, groups: [] };
	const photoKeys = definition.screens.flatMap(({ questions }) =>
		questions.filter(({ type }) => type === "photo").map(({ key }) => key),
	);
	const answers = await withoutErased(trx, responseId, submission.answers, photoKeys);
	return { ...view, groups: listAnswerLines(definition, await listPlantingsSent(trx, submission), answers) };
}

async function getSubmission(trx: Trx, responseId: string, version: number): Promise<Submission> {
	const { answers } = await trx
		.selectFrom("collect.submission")
		.select("answers")
		.where("response_id", "=", responseId)
		.where("version", "=", version)
		.executeTakeFirstOrThrow();
	return answers as Submission;
}

/** The plantings that were asked about then, with the crops they had, also those taken out since; none planted later. */
export async function listPlantingsSent(trx: Trx, { plantings }: Submission): Promise<PlantingAsked[]> {
	const ids = plantings.map(({ plantingId }) => plantingId);
	const rows = await trx
		.selectFrom("directory.planting")
		.select(["planting_id", "cultivar", "bearing_trees"])
		.where((eb) => eb("planting_id", "=", eb.fn.any(eb.val(ids))))
		.execute();
	const crops = await trx.selectFrom("directory.crop").select(["crop_key", "plant_kind", "bushel_lb"]).execute();
	return plantings.map(({ plantingId, cropKey }) => {
		const row = rows.find((planting) => planting.planting_id === plantingId);
		const crop = crops.find(({ crop_key }) => crop_key === cropKey);
		return {
			plantingId,
			cropKey,
			cultivar: row?.cultivar ?? "",
			bearingTrees: row?.bearing_trees ?? 0,
			plantKind: crop?.plant_kind === "bush" ? "bush" : "tree",
			bushelLb: crop?.bushel_lb ?? null,
		};
	});
}

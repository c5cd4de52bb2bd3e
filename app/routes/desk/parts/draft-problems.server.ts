import type { z } from "zod";
import type { Access } from "#app/auth/guard.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import type { SurveyChange } from "#app/collect/survey-draft.schema.ts";
import { checkDraft } from "#app/collect/surveys.server.ts";
import { boxOf, parseRest, type Problem } from "#app/lib/parse-form.ts";

/** Everything that is to be mended in a draft whose form did not parse, in the order of its fields and one a field. */
export async function findAllProblems(
	desk: Access<Associate>,
	schema: z.ZodObject,
	sent: FormData,
	told: Problem[],
): Promise<Problem[]> {
	const rest = parseRest(schema, sent, told) as Partial<SurveyChange>;
	const beside = await desk.transaction((trx) => checkDraft(trx, desk.viewer, rest, new Date()));
	return schema
		.keyof()
		.options.flatMap((name) => [...told, ...beside.problems].find(({ field }) => boxOf(field) === name) ?? []);
}

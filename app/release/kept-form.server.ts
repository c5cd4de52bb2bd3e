import type { Trx } from "#app/auth/scope.server.ts";
import { AskedForm } from "#app/lib/asked-form.ts";

/** Freezes the questions that a release's figures come from, in the wording that stands when they come out. */
export async function keepForm(trx: Trx, releaseId: string, surveyId: string): Promise<void> {
	const row = await trx
		.selectFrom("collect.survey as s")
		.innerJoin("collect.form_version as v", "v.form_version_id", "s.form_version_id")
		.select(["v.version", "v.definition"])
		.where("s.survey_id", "=", surveyId)
		.executeTakeFirstOrThrow();
	const form = AskedForm.safeParse(row.definition);
	// Figures do not wait for a form that an older version of this code wrote in another shape.
	if (!form.success) return;
	await trx
		.insertInto("release.form")
		.values({ release_id: releaseId, version: row.version, definition: JSON.stringify(form.data) })
		.execute();
}

import { isDeepStrictEqual } from "node:util";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Words } from "#app/lib/words.ts";
import { FormDefinition } from "./form.ts";
import { readyForms } from "./forms/ready-forms.ts";

/**
 * Stores a form as its newest version, or finds that version when nothing changed. Versions are never edited: a survey
 * keeps the words that its growers saw.
 * @returns the version that now holds `definition`.
 */
export async function ensureForm(trx: Trx, definition: FormDefinition): Promise<{ formVersionId: string }> {
	const wanted = asStored(FormDefinition.parse(definition));
	const form = await trx
		.insertInto("collect.form")
		.values({ form_key: wanted.key })
		// Writing the same key over itself locks the row, so that two who store one form at once make one version.
		.onConflict((conflict) => conflict.column("form_key").doUpdateSet({ form_key: wanted.key }))
		.returning("form_id")
		.executeTakeFirstOrThrow();
	const newest = await trx
		.selectFrom("collect.form_version")
		.select(["form_version_id", "version", "definition"])
		.where("form_id", "=", form.form_id)
		.orderBy("version", "desc")
		.limit(1)
		.executeTakeFirst();
	if (newest && isDeepStrictEqual(newest.definition, wanted)) return { formVersionId: newest.form_version_id };
	const { form_version_id } = await trx
		.insertInto("collect.form_version")
		.values({ form_id: form.form_id, version: (newest?.version ?? 0) + 1, definition: JSON.stringify(wanted) })
		.returning("form_version_id")
		.executeTakeFirstOrThrow();
	return { formVersionId: form_version_id };
}

/** The version of a form that a new survey asks: a ready form as it ships, another one as it was last published. */
export async function findFormToAsk(
	trx: Trx,
	formKey: string,
): Promise<{ formVersionId: string; title: Words } | undefined> {
	const ready = Object.values(readyForms).find(({ key }) => key === formKey);
	if (ready) return { ...(await ensureForm(trx, ready)), title: ready.title };
	const row = await trx
		.selectFrom("collect.form_version as v")
		.innerJoin("collect.form as f", "f.form_id", "v.form_id")
		.select(["v.form_version_id", "v.definition"])
		.where("f.form_key", "=", formKey)
		.orderBy("v.version", "desc")
		.limit(1)
		.executeTakeFirst();
	return row && { formVersionId: row.form_version_id, title: FormDefinition.parse(row.definition).title };
}

/** One version of a form with its questions and measures. */
export async function findFormVersion(
	trx: Trx,
	formVersionId: string,
): Promise<{ formVersionId: string; version: number; definition: FormDefinition } | undefined> {
	const row = await trx
		.selectFrom("collect.form_version")
		.select(["form_version_id", "version", "definition"])
		.where("form_version_id", "=", formVersionId)
		.executeTakeFirst();
	return (
		row && {
			formVersionId: row.form_version_id,
			version: row.version,
			definition: FormDefinition.parse(row.definition),
		}
	);
}

/** As the database gives it back: without what is undefined. */
function asStored(definition: FormDefinition): FormDefinition {
	return JSON.parse(JSON.stringify(definition)) as FormDefinition;
}

/** The form of a survey, in the version that its growers see. */
export async function findSurveyForm(trx: Trx, surveyId: string): Promise<FormDefinition | undefined> {
	const row = await trx
		.selectFrom("collect.survey as s")
		.innerJoin("collect.form_version as v", "v.form_version_id", "s.form_version_id")
		.select("v.definition")
		.where("s.survey_id", "=", surveyId)
		.executeTakeFirst();
	return row && FormDefinition.parse(row.definition);
}

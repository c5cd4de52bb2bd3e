import type { Trx } from "#app/auth/scope.server.ts";
import { baseQuantities, quantityOf } from "#app/collect/base-quantities.ts";
import { FormDefinition } from "#app/collect/form.ts";
import type { OtherSurvey } from "#app/protect/shared-cells.ts";
import { listSeasonReleases } from "#app/release/season-releases.server.ts";
import { listEditions } from "./draft-basis.server.ts";

/**
 * What other surveys of the season have released, with the quantities that they and this survey ask alike.
 * @returns with the releases that were looked at, also those that ask nothing of the same.
 */
export async function listOtherSurveys(
	trx: Trx,
	surveyId: string,
	definition: FormDefinition,
): Promise<{ others: OtherSurvey[]; heldAgainst: string[] }> {
	const releases = await listSeasonReleases(trx, surveyId);
	const heldAgainst = releases.map(({ releaseId }) => releaseId);
	const units = unitsOf(definition);
	const forms = await listForms(trx, [...new Set(releases.map((release) => release.surveyId))]);
	const alike = releases.flatMap((release) => {
		const form = forms.get(release.surveyId)!;
		const unitThere = unitsOf(form);
		const quantities = baseQuantities(form).filter((key) => units.get(key) === unitThere.get(key));
		return quantities.length > 0 ? [{ ...release, quantities }] : [];
	});
	const editions = await listEditions(trx, alike);
	return { others: editions.map((edition, at) => ({ ...edition, quantities: alike[at]!.quantities })), heldAgainst };
}

/** The unit of each base quantity of a form. */
function unitsOf({ measures }: FormDefinition): Map<string, string> {
	return new Map(measures.flatMap(({ base, key, unit }) => (base ? [[quantityOf(key), unit] as const] : [])));
}

async function listForms(trx: Trx, surveyIds: readonly string[]): Promise<Map<string, FormDefinition>> {
	if (surveyIds.length === 0) return new Map();
	const rows = await trx
		.selectFrom("collect.survey as s")
		.innerJoin("collect.form_version as v", "v.form_version_id", "s.form_version_id")
		.select(["s.survey_id", "v.definition"])
		.where("s.survey_id", "in", surveyIds)
		.execute();
	return new Map(rows.map((row) => [row.survey_id, FormDefinition.parse(row.definition)]));
}

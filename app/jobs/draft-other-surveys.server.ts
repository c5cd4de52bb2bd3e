import type { Trx } from "#app/auth/scope.server.ts";
import { baseQuantities, quantityOf } from "#app/collect/base-quantities.ts";
import { FormDefinition } from "#app/collect/form.ts";
import { groupBy } from "#app/lib/group-by.ts";
import type { OtherSurvey } from "#app/protect/other-surveys.ts";
import { ReleaseRules } from "#app/release/draft.ts";
import { listSeasonReleases } from "#app/release/season-releases.server.ts";
import { listEditions } from "./draft-basis.server.ts";

/**
 * What other surveys of the season have released, as far as it is made of the same quantities.
 * @returns with the releases that were looked at, also those that ask nothing of the same.
 */
export async function listOtherSurveys(
	trx: Trx,
	surveyId: string,
	definition: FormDefinition,
): Promise<{ others: OtherSurvey[]; heldAgainst: string[] }> {
	const releases = await listSeasonReleases(trx, surveyId);
	const heldAgainst = releases.map(({ releaseId }) => releaseId);
	if (releases.length === 0) return { others: [], heldAgainst };
	const forms = await listForms(trx, [...new Set(releases.map((release) => release.surveyId))]);
	const units = unitsOf(definition);
	const telling = releases.flatMap((release) => {
		const { form, cropKeys } = forms.get(release.surveyId)!;
		const unitThere = unitsOf(form);
		const shared = baseQuantities(form).filter((key) => units.get(key) === unitThere.get(key));
		return shared.length > 0 ? [{ ...release, shared, quantities: baseQuantities(form), cropKeys }] : [];
	});
	if (telling.length === 0) return { others: [], heldAgainst };
	const ids = telling.map(({ releaseId }) => releaseId);
	const [editions, made] = [await listEditions(trx, telling), await listMaking(trx, ids)];
	const others = telling.map(({ releaseId, shared, quantities, cropKeys }, at): OtherSurvey => {
		return { ...editions[at]!, ...made.get(releaseId)!, shared, quantities, cropKeys };
	});
	return { others, heldAgainst };
}

/** The unit of each base quantity of a form. */
function unitsOf({ measures }: FormDefinition): Map<string, string> {
	return new Map(measures.flatMap(({ base, key, unit }) => (base ? [[quantityOf(key), unit]] : [])));
}

async function listForms(trx: Trx, surveyIds: readonly string[]) {
	const rows = await trx
		.selectFrom("collect.survey as s")
		.innerJoin("collect.form_version as v", "v.form_version_id", "s.form_version_id")
		.select(["s.survey_id", "s.crop_keys", "v.definition"])
		.where("s.survey_id", "in", surveyIds)
		.execute();
	return new Map(
		rows.map((row) => [row.survey_id, { form: FormDefinition.parse(row.definition), cropKeys: row.crop_keys }]),
	);
}

/** Areas and rules that each release was made with. */
async function listMaking(trx: Trx, releaseIds: readonly string[]) {
	const areas = await trx
		.selectFrom("release.area")
		.select(["release_id", "area_key", "parent_key"])
		.where("release_id", "in", releaseIds)
		.orderBy("area_key")
		.execute();
	const releases = await trx
		.selectFrom("release.release")
		.select(["release_id", "rules"])
		.where("release_id", "in", releaseIds)
		.execute();
	const areasOf = groupBy(areas, (area) => area.release_id);
	return new Map(
		releases.map(({ release_id, rules }) => [
			release_id,
			{
				rules: ReleaseRules.parse(rules),
				areas: (areasOf.get(release_id) ?? []).flatMap(({ area_key, parent_key }) =>
					parent_key === null ? [] : [{ areaKey: area_key, parentKey: parent_key }],
				),
			},
		]),
	);
}

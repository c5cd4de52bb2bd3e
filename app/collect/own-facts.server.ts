import { underScope, type Trx } from "#app/auth/scope.server.ts";
import type { Grower } from "#app/auth/viewer.ts";
import { toldCrops } from "#app/lib/told-crops.ts";
import { FormDefinition, type Words } from "./form.ts";
import { isId } from "./surveys.server.ts";

export type OwnFigure = {
	measureKey: string;
	cropKey: string;
	value: number;
	/** Whether something was so at the operation, which an area tells as the share of its operations. */
	yesOrNo: boolean;
};
export type OwnFacts = { operationId: string; name: string; countyFips: string; figures: OwnFigure[] };

/**
 * What the viewer's operations told in one survey, as the survey's measures count it, and the release that told of it.
 * @returns undefined where none of them was asked.
 */
export async function findOwnFacts(trx: Trx, viewer: Grower, surveyId: string) {
	if (!isId(surveyId) || viewer.link) return undefined;
	const rows = await trx
		.selectFrom("collect.frame_operation as f")
		.innerJoin("collect.survey as s", "s.survey_id", "f.survey_id")
		.innerJoin("collect.form_version as v", "v.form_version_id", "s.form_version_id")
		.innerJoin("directory.operation as o", "o.operation_id", "f.operation_id")
		.where("f.survey_id", "=", surveyId)
		.where("f.operation_id", "in", viewer.operationIds)
		.where("o.status", "=", "active")
		.select(["f.operation_id as operationId", "f.county_fips as countyFips", "o.name"])
		.select(["s.season", "s.title", "s.crop_keys", "v.definition"])
		.orderBy("o.name")
		.orderBy("f.operation_id")
		.execute();
	const first = rows[0];
	if (!first) return undefined;
	const form = FormDefinition.parse(first.definition);
	const operations: OwnFacts[] = [];
	for (const { operationId, countyFips, name } of rows) {
		const figures = await listFigures(trx, surveyId, operationId, form, first.crop_keys);
		operations.push({ operationId, countyFips, name, figures });
	}
	return {
		season: first.season,
		title: first.title as Words,
		releaseId: await underScope(trx, { kind: "network" }, () => findReleaseId(trx, surveyId)),
		operations,
	};
}

/**
 * A total says nothing beside that of a whole county, so it is left out; so are quantities that are made for protection alone.
 * What was asked once stands beside the figure of all crops, as it is published.
 */
async function listFigures(
	trx: Trx,
	surveyId: string,
	operationId: string,
	{ measures, screens }: Pick<FormDefinition, "measures" | "screens">,
	cropKeys: string[],
) {
	const facts = await trx
		.selectFrom("collect.fact")
		.select(["measure_key", "crop_key", "y", "x"])
		.where("survey_id", "=", surveyId)
		.where("operation_id", "=", operationId)
		.execute();
	return measures
		.filter(({ kind, base }) => kind !== "total" && !base)
		.flatMap((measure) => {
			const { key, numerator, scale } = measure;
			const crops = toldCrops(measure, screens, cropKeys);
			const told = crops.length > 0 ? crops : ["all"];
			return facts.flatMap(({ measure_key, crop_key, y, x }): OwnFigure[] =>
				measure_key !== key || !told.includes(crop_key) || y === null || !x
					? []
					: [{ measureKey: key, cropKey: crop_key, yesOrNo: "indicator" in numerator, value: (y / x) * scale }],
			);
		});
}

/** The crops of which an operation told something that counts in a survey's figures. */
export async function listToldCrops(trx: Trx, surveyId: string, operationId: string): Promise<string[]> {
	const rows = await trx
		.selectFrom("collect.fact")
		.select("crop_key")
		.distinct()
		.where("survey_id", "=", surveyId)
		.where("operation_id", "=", operationId)
		.where("crop_key", "!=", "all")
		.where("y", "is not", null)
		.orderBy("crop_key")
		.execute();
	return rows.map(({ crop_key }) => crop_key);
}

/** The newest edition of the survey's figures. */
export async function findReleaseId(trx: Trx, surveyId: string): Promise<string | null> {
	const draft = await trx
		.selectFrom("collect.release_draft")
		.select("release_id")
		.where("survey_id", "=", surveyId)
		.where("status", "=", "approved")
		.orderBy("drafted_at", "desc")
		.limit(1)
		.executeTakeFirst();
	return draft?.release_id ?? null;
}

import type { TFunction } from "i18next";
import { scopedTransaction } from "#app/auth/scope.server.ts";
import { findReleaseId, listToldCrops } from "#app/collect/own-facts.server.ts";
import type { Mailing } from "#app/collect/survey-mailing.server.ts";
import { countyName } from "#app/i18n/county-name.ts";
import type { Language } from "#app/i18n/language.ts";
import { wordsIn } from "#app/i18n/language.ts";
import type { Formatter } from "#app/lib/format.ts";
import { comparisonKey, findComparison } from "#app/publish/comparison.server.ts";
import { leadingMeasure } from "#app/publish/finding.ts";
import { listMeasures } from "#app/publish/releases.server.ts";

type Told = Pick<Mailing, "survey_id" | "operation_id" | "county_fips">;

/**
 * The season's leading figure of a grower's own crop, in the smallest area around that shows it, as a sentence of a mail; null
 * where no area does. It is what anyone can read: own answers are not written into mail, which others may see.
 */
export async function besideSentence(
	{ survey_id, operation_id, county_fips }: Told,
	{ language, t, format }: { language: Language; t: TFunction; format: Formatter },
): Promise<string | null> {
	if (!county_fips) return null;
	const { releaseId, crops } = await scopedTransaction({ kind: "network" }, async (trx) => ({
		releaseId: await findReleaseId(trx, survey_id),
		crops: await listToldCrops(trx, survey_id, operation_id),
	}));
	const measure = releaseId ? leadingMeasure(await listMeasures(releaseId)) : undefined;
	if (!releaseId || !measure) return null;
	const wanted = crops.map((cropKey) => ({ measureKey: measure.key, cropKey }));
	const beside = await findComparison(releaseId, county_fips, wanted);
	// A figure without a likely range is left to the page, which says that it has none.
	const told = wanted.find((one) => typeof beside?.cells[comparisonKey(one)]?.lower === "number");
	const cell = told && beside?.cells[comparisonKey(told)];
	if (!told || !cell || cell.lower === null || cell.upper === null) return null;
	return t([`mail:thank_you.beside_${measure.key}`, "mail:thank_you.beside"], {
		area: cell.kind === "county" ? countyName(t, { name: cell.areaName, countyFips: cell.areaKey }) : cell.areaName,
		measure: wordsIn(measure.label, language),
		crop: t([`public:crop_said.${told.cropKey}`, `common:crop.${told.cropKey}`]),
		value: format.figure(cell.value, measure),
		...format.ends(cell.lower, cell.upper, measure),
	});
}

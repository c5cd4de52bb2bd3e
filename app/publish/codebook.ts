import type { TFunction } from "i18next";
import { wordsIn } from "#app/i18n/language.ts";
import { dataColumns, toCsv } from "./data-file.ts";
import type { ReleaseMeasure } from "./release.ts";

const statuses = ["A", "Q", "M", "N", "O"] as const;
const steadiness = ["steady", "care", "rough"] as const;

/** What every column, measure and code of a release's data file means, one row each, in the reader's language. */
export function codebookCsv(measures: readonly ReleaseMeasure[], language: string, t: TFunction): string {
	return toCsv(
		["part", "code", "name", "description", "unit"],
		[
			...dataColumns.map((column) => ["column", column, t(`column.${column}.name`), t(`column.${column}.about`), null]),
			...measures.map((measure) => [
				"measure",
				measure.key,
				wordsIn(measure.label, language),
				wordsIn(measure.description, language),
				t(`common:unitName.${measure.unit}`),
			]),
			...statuses.map((code) => ["status", code, t(`status.${code}.name`), t(`status.${code}.about`), null]),
			...steadiness.map((code) => ["steadiness", code, t(`common:steadiness.${code}`), t(`steadiness.${code}`), null]),
		],
	);
}

import { normal975 } from "#app/estimate/distributions.ts";
import type { Figure } from "#app/estimate/estimators.ts";
import { compareToSeasons } from "#app/estimate/seasons.ts";
import { isObject, readJson, type Checked, type Comparison, type Json } from "#tests/reference/checking.ts";

/** The normal quantile as the file's intervals use it; ours has all digits, and its ends are moved to be compared. */
const roundedQuantile = 1.959964;

/** Mean of several seasons and this season beside it, one comparison a value of each case. */
export async function checkSeasons(folder: string, file: string): Promise<Checked> {
	const json = await readJson(folder, file);
	const comparisons = (Array.isArray(json) ? json : []).flatMap((entry): Comparison[] => {
		if (!isObject(entry) || !isObject(entry.expected) || !Array.isArray(entry.seasons)) return [];
		const ours = compareToSeasons(figureOf(entry.this)!, entry.seasons.map(figureOf), {
			isOneOfThem: entry.this_is_one_of_the_seasons === true,
		});
		const moved = (roundedQuantile - normal975) * (ours?.difference.standardError ?? 0);
		const values: Record<string, number | null | undefined> = {
			k: ours?.mean.seasons,
			mean: ours?.mean.value,
			se_mean: ours?.mean.standardError,
			difference: ours?.difference.value,
			se_difference: ours?.difference.standardError,
			ci95_low: ours && ours.interval.lower - moved,
			ci95_high: ours && ours.interval.upper + moved,
			z: ours?.standardErrorsApart,
			relative_difference: ours?.relative?.value,
			se_relative_difference: ours?.relative?.standardError,
		};
		return Object.entries(entry.expected).map(([name, expected]) => ({
			at: `${String(entry.case)}: ${name}`,
			expected,
			actual: name in values ? (values[name] ?? null) : "not computed",
		}));
	});
	return { comparisons, notCovered: 0 };
}

function figureOf(json: Json | undefined): Figure | null {
	return Array.isArray(json) ? { value: Number(json[0]), standardError: Number(json[1]) } : null;
}

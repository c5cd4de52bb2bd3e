import { questionsOfMeasure } from "./measure-questions.ts";

type Told = Parameters<typeof questionsOfMeasure>[0] & { acrossCrops: boolean; crops?: string[] };
type Screens = readonly { perPlanting: boolean; questions: readonly { key: string }[] }[];

/**
 * The crops that a measure is told of, "all" not among them. What is asked once of an operation is an answer about none of
 * its crops by itself: told crop by crop, one set of days or causes would stand beside itself as if the crops differed. So it
 * is told of all crops together alone. In a survey of one crop the answer can only be about that one.
 */
export function toldCrops(measure: Told, screens: Screens, cropKeys: readonly string[]): string[] {
	if (measure.crops) return cropKeys.filter((key) => measure.crops!.includes(key));
	return cropKeys.length > 1 && measure.acrossCrops && restsOnOnce(measure, screens) ? [] : [...cropKeys];
}

function restsOnOnce({ numerator, denominator }: Told, screens: Screens): boolean {
	const questions = new Set(questionsOfMeasure({ numerator, denominator }));
	return screens.some((screen) => !screen.perPlanting && screen.questions.some(({ key }) => questions.has(key)));
}

import type { Trx } from "#app/auth/scope.server.ts";
import type { FormDefinition, Measure } from "#app/collect/form.ts";
import { shareMoved, standingOf, withoutOne } from "#app/estimate/without-one.ts";
import { questionsOfMeasure } from "#app/lib/measure-questions.ts";
import type { Odd } from "#app/review/odd-answers.ts";
import type { WeighedOdd } from "#app/review/save-findings.server.ts";
import type { Answered, Checking } from "./check-neighbors.server.ts";

/** Each oddity with how far the state's figure would move without the answer: what moves most is looked at first. */
export async function weighOdd(
	trx: Trx,
	checking: Checking,
	{ surveyId, operationId, stateFips, stratumKey }: Answered,
	odd: Odd[],
): Promise<WeighedOdd[]> {
	if (odd.length === 0) return [];
	const facts = await trx
		.selectFrom("collect.fact")
		.where("survey_id", "=", surveyId)
		.where("operation_id", "=", operationId)
		.where("set_aside", "=", false)
		.where("y", "is not", null)
		.select(["measure_key", "crop_key", "y", "x"])
		.execute();
	return odd.map((one): WeighedOdd => {
		const measure = measureAbout(checking.definition, one);
		const fact = facts.find(
			({ measure_key, crop_key }) => measure_key === measure?.key && (one.cropKey === null || crop_key === one.cropKey),
		);
		if (!measure || measure.kind === "day" || !fact) return { ...one, effect: null, moved: null };
		const { crop_key: cropKey } = fact;
		const tallies = checking.tallies.get(`${measure.key} ${cropKey}`) ?? [];
		const frame = checking.frame.filter((stratum) => stratum.cropKey === cropKey);
		const standing = standingOf(frame, tallies, (tally) => tally.stateFips === stateFips);
		const figure = withoutOne(measure.kind, standing, { stratumKey, y: Number(fact.y), x: Number(fact.x) });
		if (!figure) return { ...one, effect: null, moved: null };
		const scaled = (value: number | null) => (value === null ? null : value * measure.scale);
		const moved = {
			measureKey: measure.key,
			cropKey,
			value: figure.value * measure.scale,
			without: scaled(figure.without),
		};
		return { ...one, effect: shareMoved(figure), moved };
	});
}

/** The first figure that readers see of what the question asks; a day's median hardly moves by one answer. */
function measureAbout({ measures }: FormDefinition, { questionKey, cropKey }: Odd): Measure | undefined {
	const about = measures.filter(
		(measure) =>
			questionsOfMeasure(measure).includes(questionKey) &&
			(cropKey === null || (measure.crops?.includes(cropKey) ?? true)) &&
			(cropKey !== null || measure.acrossCrops),
	);
	return about.find(({ base, kind }) => !base && kind !== "day") ?? about.find(({ base }) => !base) ?? about[0];
}

import { questionsOfMeasure } from "#app/lib/measure-questions.ts";
import type { Words } from "#app/lib/words.ts";
import type { Condition, FormDefinition, Measure, Question, Screen } from "./form.ts";
import { knownTrees, knownTreesBase } from "./forms/known-trees.ts";
import { unitOfFamily } from "./quantity-unit.ts";

type Common = Pick<Measure, "worse" | "base" | "acrossCrops" | "denominator">;

const common: Common = { worse: null, base: false, acrossCrops: true, denominator: { one: true } };

/**
 * A form with measures for the questions that none of its own measures names, so that an associate's own questions are
 * estimated without anything being declared. Named and described in the question's own words.
 */
export function withDefaultMeasures(form: FormDefinition): FormDefinition {
	const named = new Set(form.measures.flatMap(questionsOfMeasure));
	const taken = new Set(form.measures.map(({ key }) => key));
	const added = form.screens
		.flatMap((screen) => screen.questions.map((question) => ({ screen, question })))
		.filter(({ question }) => !named.has(question.key))
		.flatMap(({ screen, question }) => defaultMeasures(question, screen))
		.filter(({ key }) => !taken.has(key) && taken.add(key));
	return { ...form, measures: [...form.measures, ...added] };
}

/**
 * What is estimated of one question: a number's mean an operation, a percent's mean (weighed by trees where each planting has
 * one), the share of operations of each choice, a date's middle. A number that adds up is a base quantity too, and so are
 * the trees that a percent weighs. Texts and photos have no measures; nor has a temperature of each planting, for
 * temperatures do not add up.
 */
export function defaultMeasures(question: Question, { perPlanting }: Pick<Screen, "perPlanting">): Measure[] {
	switch (question.type) {
		case "number":
			return numberMeasures(question, perPlanting);
		case "percent":
			return perPlanting ? weighedPercent(question) : [oncePercent(question)];
		case "choice":
		case "rating":
		case "several":
			return question.options.map((option) => optionMeasure(question, option, perPlanting));
		case "date":
			return [dayMeasure(question)];
		default:
			return [];
	}
}

function numberMeasures(question: Extract<Question, { type: "number" }>, perPlanting: boolean): Measure[] {
	const { key, unitFamily } = question;
	const isTemperature = unitFamily === "temperature";
	if (isTemperature && perPlanting) return [];
	const numerator = { terms: [{ question: key, times: 1 }] };
	const shape = { unit: unitOfFamily[unitFamily], decimals: isTemperature ? 1 : 0, scale: 1, numerator };
	const hue = isTemperature ? ("cold" as const) : ("yield" as const);
	const mean: Measure = {
		...common,
		...shape,
		key,
		kind: "mean",
		hue,
		label: nameOf(question),
		description: {
			en: `Mean per operation: ${question.text.en}`,
			es: `Promedio por finca: ${question.text.es}`,
		},
	};
	return isTemperature ? [mean] : [{ ...mean, protects: [key] }, baseOf(key, nameOf(question), shape)];
}

function baseOf(key: string, label: Words, shape: Pick<Measure, "unit" | "decimals" | "scale" | "numerator">): Measure {
	return {
		...common,
		...shape,
		key: `base.${key}`,
		kind: "total",
		hue: "yield",
		label,
		description: label,
		denominator: null,
		base: true,
	};
}

function oncePercent(question: Question): Measure {
	return {
		...common,
		key: question.key,
		// No percent is read that is below 0 or above 100, so that the mean of them is a share too.
		kind: "proportion",
		label: nameOf(question),
		description: { en: `Mean per operation: ${question.text.en}`, es: `Promedio por finca: ${question.text.es}` },
		unit: "percent",
		decimals: 0,
		hue: "yield",
		// A fraction, as every share is until it is shown.
		numerator: { terms: [{ question: question.key, times: 0.01 }] },
		scale: 100,
	};
}

function weighedPercent(question: Question): Measure[] {
	const numerator = { terms: [{ known: "bearing_trees" as const, times: 1, share: question.key }] };
	const key = `${question.key}_trees`;
	const share: Measure = {
		...oncePercent(question),
		description: {
			en: `Each planting counts with its trees or bushes in bearing: ${question.text.en}`,
			es: `Cada plantación cuenta con sus árboles o arbustos en producción: ${question.text.es}`,
		},
		numerator,
		denominator: knownTrees,
		protects: [key, "bearing_trees"],
	};
	return [share, baseOf(key, nameOf(question), { unit: "trees", decimals: 0, scale: 1, numerator }), knownTreesBase];
}

function optionMeasure(
	question: Question,
	option: { key: string; text: Words; crops?: string[] },
	perPlanting: boolean,
): Measure {
	const chosen: Condition = { compare: "=", question: question.key, to: { value: option.key } };
	const name = nameOf(question);
	return {
		...common,
		key: `${question.key}_${option.key}`,
		kind: "proportion",
		label: { en: `${name.en}: ${option.text.en}`, es: `${name.es}: ${option.text.es}` },
		description: {
			en: `Share of operations that answered “${option.text.en}” to: ${question.text.en}`,
			es: `Parte de las fincas que respondieron “${option.text.es}” a: ${question.text.es}`,
		},
		unit: "percent",
		decimals: 0,
		hue: "yield",
		numerator: { indicator: perPlanting ? { any_planting: chosen } : chosen },
		scale: 100,
		...(option.crops && { crops: option.crops, acrossCrops: false }),
	};
}

function dayMeasure(question: Question): Measure {
	return {
		...common,
		key: question.key,
		kind: "day",
		label: nameOf(question),
		description: {
			en: `The day by which half of the operations were there: ${question.text.en}`,
			es: `El día en que la mitad de las fincas ya había llegado a ese punto: ${question.text.es}`,
		},
		unit: "day",
		decimals: 0,
		hue: "bloom",
		numerator: { day: question.key },
		scale: 1,
	};
}

function nameOf({ label, text }: Question): Words {
	return label ?? text;
}

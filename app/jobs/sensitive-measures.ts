import type { FormDefinition } from "#app/collect/form.ts";
import { questionsOfMeasure } from "#app/lib/measure-questions.ts";

export type SensitiveMeasures = {
	/** Every measure made of a sensitive question: a cell where all have one value of it is withheld. */
	all: string[];
	/** Those that count who has something, 0 or 1 an operation: how many is guarded from being worked out too. */
	counted: string[];
};

/** The measures that are made of at least one question marked sensitive. */
export function sensitiveMeasures({ screens, measures }: FormDefinition): SensitiveMeasures {
	const sensitive = new Set(
		screens.flatMap(({ questions }) => questions.filter((question) => question.sensitive).map(({ key }) => key)),
	);
	const made = measures.filter(
		(measure) => !measure.base && questionsOfMeasure(measure).some((key) => sensitive.has(key)),
	);
	return {
		all: made.map(({ key }) => key),
		counted: made.filter(({ numerator }) => "indicator" in numerator).map(({ key }) => key),
	};
}

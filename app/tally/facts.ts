import type { Answer, FormDefinition, Quantity, Screen } from "#app/collect/form.ts";
import { evaluate, type ConditionValue, type Known } from "#app/lib/condition.ts";

export type Fact = { measureKey: string; cropKey: string; y: number; x: number };
export type SubmittedResponse = { plantings: { plantingId: string; cropKey: string }[]; answers: Answer[] };

/**
 * The facts of one submitted response: y and x of each measure for each crop of the operation, its plantings of the crop
 * summed first, and for "all" crops together where the measure says that this sum means something. Indicators are
 * evaluated on the sums, so a proportion over "all" counts the operation once.
 *
 * No fact is made where an answer it needs is missing, not known or refused: zero is an answer, silence is not. A cause
 * that was not asked since its condition does not hold took nothing (0), and so did one left blank beside others that
 * add up to the whole hundred.
 * @param response `plantings` are those that were asked about; answers are canonical (pounds, trees, percent).
 * @returns y and x in the canonical units of the measure's questions; x is 1 for totals and where the denominator is one.
 */
export function factsOf(definition: FormDefinition, response: SubmittedResponse): Fact[] {
	const answers = new Answers(definition, response);
	const crops = [...new Set(response.plantings.map((planting) => planting.cropKey))];
	return definition.measures.flatMap((measure) =>
		[...crops, ...(measure.acrossCrops && crops.length > 0 ? ["all"] : [])].flatMap((cropKey) => {
			const y = quantityOf(measure.numerator, answers, cropKey);
			const x = measure.denominator === null ? 1 : quantityOf(measure.denominator, answers, cropKey);
			return y === null || x === null ? [] : [{ measureKey: measure.key, cropKey, y, x }];
		}),
	);
}

function quantityOf(quantity: Quantity, answers: Answers, cropKey: string): number | null {
	if ("one" in quantity) return 1;
	if ("indicator" in quantity) {
		const holds = evaluate(quantity.indicator, answers.summed(cropKey));
		return holds === null ? null : Number(holds);
	}
	let sum = 0;
	for (const term of quantity.terms) {
		const value = answers.sumOf(term.question, cropKey);
		const share = term.share === undefined ? 100 : answers.shareOf(term.share);
		if (typeof value !== "number" || share === null) return null;
		sum += (term.times * value * share) / 100;
	}
	return quantity.atLeast === undefined ? sum : Math.max(quantity.atLeast, sum);
}

/** One response's answers, looked up by question and planting. */
class Answers {
	private readonly given = new Map<string, ConditionValue>();
	private readonly answered = new Set<string>();
	private readonly perPlanting: Set<string>;

	constructor(
		private readonly definition: FormDefinition,
		private readonly response: SubmittedResponse,
	) {
		for (const answer of response.answers) {
			const at = place(answer.questionKey, answer.plantingId);
			this.answered.add(at);
			if (answer.kind === "given" && answer.value !== null) this.given.set(at, answer.value);
		}
		this.perPlanting = new Set(
			definition.screens.filter((screen) => screen.perPlanting).flatMap((screen) => screen.questions.map((q) => q.key)),
		);
	}

	/** A planting question's sum over the crop's plantings, null unless each has a number; else the one answer. */
	sumOf(question: string, cropKey: string): ConditionValue | null {
		if (!this.perPlanting.has(question)) return this.given.get(place(question, null)) ?? null;
		let sum = 0;
		for (const { plantingId } of this.plantingsOf(cropKey)) {
			const value = this.given.get(place(question, plantingId));
			if (typeof value !== "number") return null;
			sum += value;
		}
		return sum;
	}

	/** What an indicator sees: the crop's sums, and its plantings one by one for `any_planting`. */
	summed(cropKey: string): Known {
		return { value: (question) => this.sumOf(question, cropKey), rows: this.rowsOf(this.plantingsOf(cropKey)) };
	}

	/** A percent question told once for the operation; see `factsOf` for what stands in when it has no answer. */
	shareOf(question: string): number | null {
		const value = this.given.get(place(question, null));
		if (typeof value === "number") return value;
		if (this.answered.has(place(question, null))) return null;
		const screen = this.definition.screens.find(({ questions }) => questions.some(({ key }) => key === question));
		if (!screen) return null;
		return this.hidden(screen, question) || this.othersMakeHundred(screen, question) ? 0 : null;
	}

	private hidden(screen: Screen, question: string): boolean {
		const known: Known = {
			value: (key) => this.given.get(place(key, null)),
			rows: this.rowsOf(this.response.plantings),
		};
		const conditions = [screen.condition, screen.questions.find(({ key }) => key === question)?.condition];
		return conditions.some((condition) => condition !== undefined && evaluate(condition, known) === false);
	}

	private othersMakeHundred(screen: Screen, question: string): boolean {
		if (!screen.sumToHundred?.includes(question)) return false;
		const total = screen.sumToHundred
			.map((key) => this.given.get(place(key, null)))
			.reduce<number>((sum, value) => sum + (typeof value === "number" ? value : 0), 0);
		return Math.abs(total - 100) < 1e-6;
	}

	private plantingsOf(cropKey: string) {
		return this.response.plantings.filter((planting) => cropKey === "all" || planting.cropKey === cropKey);
	}

	private rowsOf(plantings: { plantingId: string }[]): Known["rows"] {
		return plantings.map(
			({ plantingId }) =>
				(question) =>
					this.given.get(place(question, plantingId)),
		);
	}
}

function place(questionKey: string, plantingId: string | null): string {
	return `${questionKey} ${plantingId ?? ""}`;
}

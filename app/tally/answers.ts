import type { Answer, FormDefinition, Question, Screen, Share, Term } from "#app/collect/form.ts";
import { dayOfDate } from "#app/lib/day-of-year.ts";
import { evaluate, type ConditionValue, type Known } from "#app/lib/condition.ts";

/** `bearingTrees` is what the directory knew of a planting when the answers were sent in. */
export type SubmittedResponse = {
	plantings: { plantingId: string; cropKey: string; bearingTrees?: number }[];
	answers: Answer[];
};
type Asked = { question: Question; screen: Screen };

/** One response's answers, looked up by question and planting, and summed over the plantings of a crop. */
export class Answers {
	private readonly given = new Map<string, ConditionValue>();
	private readonly answered = new Set<string>();
	private readonly asked: Map<string, Asked>;

	constructor(
		definition: FormDefinition,
		private readonly response: SubmittedResponse,
	) {
		for (const answer of response.answers) {
			const at = place(answer.questionKey, answer.plantingId);
			this.answered.add(at);
			if (answer.kind === "given" && answer.value !== null) this.given.set(at, answer.value);
		}
		this.asked = new Map(
			definition.screens.flatMap((screen) =>
				screen.questions.map((question): [string, Asked] => [question.key, { question, screen }]),
			),
		);
	}

	/** What an indicator sees: the crop's sums, and its plantings one by one for `any_planting`. */
	summed(cropKey: string): Known {
		return { value: (question) => this.sumOf(question, cropKey), rows: this.rowsOf(this.plantingsOf(cropKey)) };
	}

	/** One term of a linear form, over the plantings of the crop; null where an answer that it needs is not there. */
	termOf(term: Term, cropKey: string): number | null {
		const { share } = term;
		const sharePerPlanting = share !== undefined && this.isPerPlanting(typeof share === "string" ? share : share.part);
		if (!sharePerPlanting) {
			const value = "known" in term ? this.treesOf(cropKey) : this.sumOf(term.question, cropKey);
			const part = share === undefined ? 100 : this.shareAt(share, null);
			return typeof value !== "number" || part === null ? null : (term.times * value * part) / 100;
		}
		let sum = 0;
		for (const { plantingId, bearingTrees } of this.plantingsOf(cropKey)) {
			const value = "known" in term ? bearingTrees : this.given.get(place(term.question, plantingId));
			const part = this.shareAt(share, plantingId);
			if (typeof value !== "number" || part === null) return null;
			sum += (term.times * value * part) / 100;
		}
		return sum;
	}

	/** A date's day of the year; where each planting has one, the earliest or latest, null unless all that were asked told it. */
	dayOf(question: string, take: "earliest" | "latest", cropKey: string): number | null {
		if (this.isMissing(question, cropKey)) return null;
		const plantingIds = this.isPerPlanting(question) ? this.plantingsOf(cropKey).map((one) => one.plantingId) : [null];
		const days = plantingIds.flatMap((id) => {
			const value = this.given.get(place(question, id));
			const day = typeof value === "string" ? dayOfDate(value) : null;
			return day === null ? [] : [day];
		});
		if (days.length === 0) return null;
		return take === "earliest" ? Math.min(...days) : Math.max(...days);
	}

	/** Whether a question was asked, of the operation or of a planting of the crop, and has no value there. */
	isMissing(question: string, cropKey: string): boolean {
		const asked = this.asked.get(question);
		if (!asked) return false;
		const plantingIds = asked.screen.perPlanting ? this.plantingsOf(cropKey).map((one) => one.plantingId) : [null];
		return plantingIds.some((id) => !this.given.has(place(question, id)) && !this.isHidden(asked, id));
	}

	/** A planting question's sum over the crop's plantings, null unless each has a number; else the one answer. */
	private sumOf(question: string, cropKey: string): ConditionValue | null {
		if (!this.isPerPlanting(question)) return this.given.get(place(question, null)) ?? null;
		return sumAll(this.plantingsOf(cropKey).map(({ plantingId }) => this.given.get(place(question, plantingId))));
	}

	private treesOf(cropKey: string): number | null {
		return sumAll(this.plantingsOf(cropKey).map(({ bearingTrees }) => bearingTrees));
	}

	/** A share in percent, of a planting or of the whole operation; see `factsOf` for what stands in without an answer. */
	private shareAt(share: Share, plantingId: string | null): number | null {
		if (typeof share === "string") return this.percentAt(share, plantingId);
		const [part, whole] = [this.percentAt(share.part, plantingId), this.percentAt(share.whole, plantingId)];
		return part === null || whole === null || whole === 0 ? null : (100 * part) / whole;
	}

	/** A number, or the score of a rating. */
	private percentAt(key: string, plantingId: string | null): number | null {
		const value = this.given.get(place(key, plantingId));
		if (typeof value === "number") return value;
		const asked = this.asked.get(key);
		if (!asked) return null;
		if (asked.question.type === "rating" && value !== undefined)
			return asked.question.options.find((option) => option.key === value)?.score ?? null;
		if (this.answered.has(place(key, plantingId))) return null;
		return this.isHidden(asked, plantingId) || this.othersMakeHundred(asked, plantingId) ? 0 : null;
	}

	private isHidden({ question, screen }: Asked, plantingId: string | null): boolean {
		const known: Known = {
			value: (key) => this.given.get(place(key, plantingId)) ?? this.given.get(place(key, null)),
			rows: this.rowsOf(this.response.plantings),
		};
		const conditions = [screen.condition, question.condition];
		return conditions.some((condition) => condition !== undefined && evaluate(condition, known) === false);
	}

	private othersMakeHundred({ question, screen }: Asked, plantingId: string | null): boolean {
		if (!screen.sumToHundred?.includes(question.key)) return false;
		const total = screen.sumToHundred
			.map((key) => this.given.get(place(key, plantingId)))
			.reduce<number>((sum, value) => sum + (typeof value === "number" ? value : 0), 0);
		return Math.abs(total - 100) < 1e-6;
	}

	private isPerPlanting(question: string): boolean {
		return this.asked.get(question)?.screen.perPlanting ?? false;
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

function sumAll(values: (ConditionValue | undefined)[]): number | null {
	let sum = 0;
	for (const value of values) {
		if (typeof value !== "number") return null;
		sum += value;
	}
	return sum;
}

function place(questionKey: string, plantingId: string | null): string {
	return `${questionKey} ${plantingId ?? ""}`;
}

/**
 * A condition on named values. `any_planting` holds when its inner condition holds for at least one row; inside it the
 * row's own values come before those told once.
 */
export type Condition =
	Comparison | { all: Condition[] } | { any: Condition[] } | { not: Condition } | { any_planting: Condition };

export type Comparison = {
	compare: "<" | "<=" | "=" | "!=" | ">=" | ">";
	question: string;
	/** `times` multiplies the other number: "more than twice a normal crop". */
	to: { value: number | string } | { question: string; times?: number };
};

export type ConditionValue = number | string | string[];
/** What is known: null or undefined where nothing is (not answered, not known, refused). */
export type Known = {
	value(question: string): ConditionValue | null | undefined;
	/** One lookup a row, for `any_planting`. */
	rows: ((question: string) => ConditionValue | null | undefined)[];
};

/**
 * Whether a condition holds: true, false, or null where what is known does not decide it. Unknown values follow
 * Kleene's three-valued logic, so "trees > 0 and picked = 0" is false for no trees even when the picking is not known.
 * @returns never throws for odd values: a number beside a text is "not known", since neither order nor equality is meant.
 */
export function evaluate(condition: Condition, known: Known): boolean | null {
	if ("all" in condition) return both(condition.all.map((inner) => evaluate(inner, known)));
	if ("any" in condition) return either(condition.any.map((inner) => evaluate(inner, known)));
	if ("not" in condition) return negated(evaluate(condition.not, known));
	if ("any_planting" in condition) {
		return either(
			known.rows.map((row) =>
				evaluate(condition.any_planting, { value: (key) => row(key) ?? known.value(key), rows: [] }),
			),
		);
	}
	const { to } = condition;
	const right = "question" in to ? times(known.value(to.question), to.times) : to.value;
	return compared(known.value(condition.question), condition.compare, right);
}

/** Every comparison of a condition, with whether it stands inside `any_planting`. */
export function comparisonsIn(condition: Condition, inRows = false): { of: Comparison; inRows: boolean }[] {
	if ("all" in condition) return condition.all.flatMap((inner) => comparisonsIn(inner, inRows));
	if ("any" in condition) return condition.any.flatMap((inner) => comparisonsIn(inner, inRows));
	if ("not" in condition) return comparisonsIn(condition.not, inRows);
	if ("any_planting" in condition) return comparisonsIn(condition.any_planting, true);
	return [{ of: condition, inRows }];
}

/** The names a condition speaks of, each once. */
export function questionsIn(condition: Condition): string[] {
	return [...new Set(comparisonsIn(condition).flatMap(({ of }) => questionsOf(of)))];
}

export function questionsOf({ question, to }: Comparison): string[] {
	return "question" in to ? [question, to.question] : [question];
}

/** Only a number can be multiplied; what is not one is not known. */
function times(value: ConditionValue | null | undefined, factor: number | undefined) {
	if (factor === undefined) return value;
	return typeof value === "number" ? value * factor : null;
}

function both(results: (boolean | null)[]): boolean | null {
	if (results.includes(false)) return false;
	return results.includes(null) ? null : true;
}

function either(results: (boolean | null)[]): boolean | null {
	if (results.includes(true)) return true;
	return results.includes(null) ? null : false;
}

function negated(result: boolean | null): boolean | null {
	return result === null ? null : !result;
}

function compared(
	left: ConditionValue | null | undefined,
	operator: Comparison["compare"],
	right: ConditionValue | null | undefined,
): boolean | null {
	if (left === null || left === undefined || right === null || right === undefined) return null;
	if (Array.isArray(left) || Array.isArray(right)) return chosen(left, operator, right);
	if (typeof left !== typeof right) return null;
	switch (operator) {
		case "<":
			return left < right;
		case "<=":
			return left <= right;
		case "=":
			return left === right;
		case "!=":
			return left !== right;
		case ">=":
			return left >= right;
		case ">":
			return left > right;
	}
}

/** Of several choices, "=" asks whether one is among them. */
function chosen(left: ConditionValue, operator: string, right: ConditionValue): boolean | null {
	const [many, one] = Array.isArray(left) ? [left, right] : [right, left];
	if (!Array.isArray(many) || typeof one !== "string") return null;
	if (operator === "=") return many.includes(one);
	return operator === "!=" ? !many.includes(one) : null;
}

/** A quantity known of every respondent, and its total over the frame: bearing trees, or 1 for a count. */
export type Auxiliary = { name: string; values: readonly number[]; total: number };

/** Auxiliaries made independent of each other: each of weighted length 1 and at right angles to all before it. */
export type Basis = Omit<Auxiliary, "name">[];

/**
 * Makes auxiliaries independent, carrying their totals along, so that each can be fitted by itself. One that the others
 * already determine is left out, with what its total then ought to be handed to `onDependent`.
 * @param weights one an operation, above 0.
 * Source: Gram and Schmidt, modified and repeated once so that no digits are lost; Björck, Numerical Methods for Least
 * Squares Problems (1996), from memory.
 */
export function independentBasis(
	auxiliaries: readonly Auxiliary[],
	weights: readonly number[],
	onDependent: (auxiliary: Auxiliary, impliedTotal: number) => void = () => {},
): Basis {
	const basis: Basis = [];
	for (const auxiliary of auxiliaries) {
		const length = Math.sqrt(product(auxiliary.values, auxiliary.values, weights));
		let rest: Omit<Auxiliary, "name"> = auxiliary;
		for (let pass = 0; pass < 2; pass++) for (const direction of basis) rest = withoutPart(rest, direction, weights);
		const left = Math.sqrt(product(rest.values, rest.values, weights));
		if (left <= 1e-10 * length) onDependent(auxiliary, auxiliary.total - rest.total);
		else basis.push({ values: rest.values.map((value) => value / left), total: rest.total / left });
	}
	return basis;
}

/** Residuals of the weighted regression of values on the basis. */
export function residualsOf(values: readonly number[], basis: Basis, weights: readonly number[]): number[] {
	const rest = [...values];
	// At right angles to each other, the directions can each be taken out of the values by themselves.
	for (const direction of basis) {
		const part = product(values, direction.values, weights);
		if (part === 0) continue;
		for (let i = 0; i < rest.length; i++) rest[i]! -= part * direction.values[i]!;
	}
	return rest;
}

/** Weighted sum of products of two lists. */
export function product(a: readonly number[], b: readonly number[], weights: readonly number[]): number {
	let sum = 0;
	for (let i = 0; i < weights.length; i++) sum += weights[i]! * a[i]! * b[i]!;
	return sum;
}

function withoutPart(
	{ values, total }: Omit<Auxiliary, "name">,
	direction: Omit<Auxiliary, "name">,
	weights: readonly number[],
): { values: number[]; total: number } {
	const part = product(values, direction.values, weights);
	return {
		values: values.map((value, i) => value - part * direction.values[i]!),
		total: total - part * direction.total,
	};
}

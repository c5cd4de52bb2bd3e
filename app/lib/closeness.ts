/** A text as it is compared: no accents, no signs, no capitals, one space between words. */
export function plainText(text: string): string {
	return text
		.normalize("NFD")
		.replace(/\p{M}/gu, "")
		.toLowerCase()
		.replace(/['’.]/g, "")
		.replace(/[^\p{L}\p{N}]+/gu, " ")
		.trim();
}

/**
 * How many letters must be put in, left out, changed or swapped with their neighbour to make one text of the other
 * (optimal string alignment).
 */
export function editDistance(a: string, b: string): number {
	let before: number[] = [];
	let last = Array.from({ length: b.length + 1 }, (_, j) => j);
	for (let i = 1; i <= a.length; i++) {
		const row = [i];
		for (let j = 1; j <= b.length; j++) {
			const change = last[j - 1]! + (a[i - 1] === b[j - 1] ? 0 : 1);
			let best = Math.min(change, last[j]! + 1, row[j - 1]! + 1);
			const swapped = i > 1 && j > 1 && a[i - 1] === b[j - 2] && a[i - 2] === b[j - 1];
			if (swapped) best = Math.min(best, before[j - 2]! + 1);
			row.push(best);
		}
		[before, last] = [last, row];
	}
	return last[b.length]!;
}

/** From 0 to 1: how alike two texts are, letter by letter. */
export function likeness(a: string, b: string): number {
	const longest = Math.max(a.length, b.length);
	return longest === 0 ? 1 : 1 - editDistance(a, b) / longest;
}

/** The one of several names that was most likely meant, or undefined where none is near: at most a third may differ. */
export function nearestName(typed: string, names: readonly string[]): string | undefined {
	const plain = plainText(typed);
	const near = names
		.map((name) => ({ name, like: likeness(plain, plainText(name)) }))
		.filter(({ like }) => like >= 2 / 3)
		.toSorted((x, y) => y.like - x.like || x.name.localeCompare(y.name));
	return near[0]?.name;
}

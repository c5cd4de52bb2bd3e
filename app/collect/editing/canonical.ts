/** One text for each value: alike whatever the order of an object's keys, and without what is undefined. */
export function canonical(value: unknown): string {
	return JSON.stringify(value, (_key, inner: unknown) => {
		if (typeof inner !== "object" || inner === null || Array.isArray(inner)) return inner;
		return Object.fromEntries(Object.entries(inner).toSorted(([a], [b]) => (a < b ? -1 : 1)));
	});
}

export function isSame(one: unknown, other: unknown): boolean {
	return canonical(one) === canonical(other);
}

/**
 * A sentence translated once, to be filled for each of thousands of areas: looking a sentence up takes much longer than
 * filling it. Only for gaps that no plural hangs on.
 * @param say translates the sentence with a mark in each gap, whatever their order in the language.
 */
export function sentencePattern<Gap extends string>(
	gaps: readonly Gap[],
	say: (marks: Record<Gap, string>) => string,
): (words: Record<Gap, string>) => string {
	const marks = Object.fromEntries(gaps.map((gap) => [gap, `${mark}${gap}${mark}`])) as Record<Gap, string>;
	const parts = say(marks).split(mark);
	return (words) => parts.map((part, index) => (index % 2 === 1 ? words[part as Gap] : part)).join("");
}

/** In no text that a person writes. */
const mark = "\u0000";

/** What is made for a key is made once, by the first of those that ask with it. */
export function onceEach<Key, Value, Rest extends unknown[] = []>(
	make: (key: Key, ...rest: Rest) => Value,
): (key: Key, ...rest: Rest) => Value {
	const made = new Map<Key, Value>();
	return (key, ...rest) => {
		if (!made.has(key)) made.set(key, make(key, ...rest));
		return made.get(key) as Value;
	};
}

import { plain } from "./table-rows.ts";

/**
 * The areas that somebody may mean by a name as typed: the one that is called so in full or by its name alone, else those in
 * whose full name every word occurs, whatever its accents and capitals.
 */
export function areasNamed<A extends { areaName: string }>(
	areas: readonly A[],
	typed: string,
	fullName: (area: A) => string,
): A[] {
	const words = plain(typed).split(/[\s,]+/).filter(Boolean); // prettier-ignore
	if (words.length === 0) return [];
	const called = (name: string) => plain(name).split(/[\s,]+/).join(" ") === words.join(" "); // prettier-ignore
	const inFull = areas.filter((area) => called(fullName(area)));
	if (inFull.length > 0) return inFull;
	const alone = areas.filter(({ areaName }) => called(areaName));
	if (alone.length > 0) return alone;
	return areas.filter((area) => words.every((word) => plain(fullName(area)).includes(word)));
}

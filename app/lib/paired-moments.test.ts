import * as fc from "fast-check";
import { expect, test } from "vitest";
import { momentsOf } from "#app/lib/moments.ts";
import { addPairedMoments, emptyPairedMoments, pairedMomentsOf } from "#app/lib/paired-moments.ts";

const pounds = fc.integer({ min: 0, max: 500_000 });
const operation = fc.record({ yBefore: pounds, xBefore: pounds, yNow: pounds, xNow: pounds });

test("any split of operations that answered twice gives the moments of all together", () => {
	fc.assert(
		fc.property(fc.array(operation, { maxLength: 30 }), fc.nat(30), (all, cut) => {
			const whole = pairedMomentsOf(all);
			const sum = addPairedMoments(pairedMomentsOf(all.slice(0, cut)), pairedMomentsOf(all.slice(cut)));
			for (const key of Object.keys(whole) as (keyof typeof whole)[]) {
				expect(Math.abs(sum[key] - whole[key]), key).toBeLessThan(1e-11 * all.length * 2.5e11 + 1e-9);
			}
		}),
	);
});

test("an operation that gives the same answers twice has the moments of one season", () => {
	const answers = [3, 8, 4].map((y, i) => ({ y, x: 10 + i ** 2 }));
	const paired = pairedMomentsOf(answers.map(({ y, x }) => ({ yBefore: y, xBefore: x, yNow: y, xNow: x })));
	const { mYY, mXY, mXX } = momentsOf(answers);
	expect(paired).toMatchObject({ n: 3, mYY, mYX: mXY, mXY, mXX });
});

test("nobody adds nothing, and a half operation is refused", () => {
	const some = pairedMomentsOf([{ yBefore: 1, xBefore: 2, yNow: 3, xNow: 4 }]);
	expect(addPairedMoments(some, emptyPairedMoments)).toEqual(some);
	expect(addPairedMoments(emptyPairedMoments, some)).toEqual(some);
	expect(() => addPairedMoments(some, { ...some, n: 1.5 })).toThrow(RangeError);
	expect(() => pairedMomentsOf([{ yBefore: 1, xBefore: 2, yNow: 3, xNow: Number.NaN }])).toThrow(RangeError);
});

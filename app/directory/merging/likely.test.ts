import { expect, test } from "vitest";
import { type Candidate, likelyPairs, pairKey } from "./likely.ts";

let made = 0;
const grower = (given: Partial<Candidate>): Candidate => ({
	operationId: `id-${String(made++).padStart(4, "0")}`,
	name: `Nobody ${made}`,
	contactName: `Contact ${made * 7919}`,
	email: null,
	phone: null,
	countyFips: "19103",
	...given,
});
const signs = (...growers: Candidate[]) => likelyPairs(growers).map((pair) => pair.signs.join());

test("the same address or telephone makes a pair, wherever they are", () => {
	const a = grower({ email: "Ada@quail.example" });
	expect(signs(a, grower({ email: "ada@QUAIL.example", countyFips: "55025" }))).toEqual(["email"]);
	expect(
		signs(grower({ name: "Wren", phone: "(555) 010-1234" }), grower({ name: "Alder", phone: "+1 555 010 1234" })),
	).toEqual(["phone"]);
});

test("a close name makes a pair in one county only, and common words do not", () => {
	const a = grower({ name: "Otter Slough Orchard" });
	expect(signs(a, grower({ name: "Oter Slough Fruit Farm" }))).toEqual(["name"]);
	expect(signs(a, grower({ name: "Otter Slough Orchard", countyFips: "55025" }))).toEqual([]);
	expect(signs(a, grower({ name: "Quail Bend Orchard" }))).toEqual([]);
});

test("two who were said to be two are no pair", () => {
	const [a, b] = [grower({ name: "Quail Bend" }), grower({ name: "Quail Bend" })];
	expect(likelyPairs([a, b])).toHaveLength(1);
	expect(likelyPairs([a, b], new Set([pairKey(b.operationId, a.operationId)]))).toEqual([]);
});

test("three of one address are three pairs, each once", () => {
	const three = [1, 2, 3].map(() => grower({ email: "one@mail.example", name: "Quail Bend" }));
	expect(likelyPairs(three)).toHaveLength(3);
});

import { describe, expect, test } from "vitest";
import { sizeClassOf, stratumKeyOf } from "./frame.ts";

describe("size class", () => {
	test.each([
		[0, "small"],
		[99, "small"],
		[100, "medium"],
		[999, "medium"],
		[1000, "large"],
		[250_000, "large"],
	])("%i bearing trees are %s", (trees, sizeClass) => expect(sizeClassOf(trees)).toBe(sizeClass));
});

test("a stratum is a state and a size class", () => expect(stratumKeyOf("IA", "small")).toBe("IA-small"));

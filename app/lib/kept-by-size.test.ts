import { expect, test } from "vitest";
import { KeptBySize } from "./kept-by-size.ts";

test("what was asked for longest ago goes when the room is full", () => {
	const kept = new KeptBySize<string>({ inAll: 10, each: 6 });
	kept.keep("a", "A", 4);
	kept.keep("b", "B", 4);
	expect(kept.get("a")).toBe("A");
	kept.keep("c", "C", 4);
	expect([kept.get("a"), kept.get("b"), kept.get("c")]).toEqual(["A", undefined, "C"]);
});

test("what is too large by itself is not kept and drives nothing out, and what is kept stays as it is", () => {
	const kept = new KeptBySize<string>({ inAll: 10, each: 6 });
	kept.keep("a", "A", 4);
	kept.keep("b", "B", 7);
	kept.keep("a", "other", 6);
	expect([kept.get("a"), kept.get("b")]).toEqual(["A", undefined]);
});

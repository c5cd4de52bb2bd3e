import { expect, test } from "vitest";
import { isWanted, SubscribeForm } from "./choice.ts";

const report = { crops: ["apple", "plum"], states: ["19", "55"] };

test("who chose nothing gets every report; who chose gets those on one of the crops and one of the states", () => {
	expect(isWanted({ crops: [], states: [] }, report)).toBe(true);
	expect(isWanted({ crops: ["plum", "aronia"], states: [] }, report)).toBe(true);
	expect(isWanted({ crops: ["aronia"], states: [] }, report)).toBe(false);
	expect(isWanted({ crops: ["plum"], states: ["27"] }, report)).toBe(false);
	expect(isWanted({ crops: ["plum"], states: ["27", "55"] }, report)).toBe(true);
});

test("one ticked box, several and none are read alike, and an address without a place is refused in words", () => {
	const form = { email: " a@b.example ", language: "es" };
	expect(SubscribeForm.parse(form)).toEqual({ email: "a@b.example", language: "es", crops: [], states: [] });
	expect(SubscribeForm.parse({ ...form, crops: "apple", states: ["19", "55"] })).toMatchObject({
		crops: ["apple"],
		states: ["19", "55"],
	});
	const wrong = SubscribeForm.safeParse({ ...form, email: "nobody" });
	expect(wrong.error?.issues[0]?.message).toBe("email_wrong");
});

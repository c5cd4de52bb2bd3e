import { expect, test } from "vitest";
import { sameSitePath } from "./same-site-path.ts";

test("a path of this site stays as it is, with its search", () => {
	expect(sameSitePath("/desk/surveys?page=2#list")).toBe("/desk/surveys?page=2#list");
});

test.each([
	"//evil.example/desk",
	"/\\evil.example",
	"/%0d/../\\evil.example",
	"https://evil.example/",
	"javascript:alert(1)",
	"/\t/evil.example",
	"/\n/evil.example",
	"desk",
	"",
	"/" + "a".repeat(2001),
])("%j leads nowhere but the fallback", (value) => {
	expect(sameSitePath(value, "/me")).toBe("/me");
});

test.each([null, undefined, 4, new File([], "x")])("what is no text leads to the fallback", (value) => {
	expect(sameSitePath(value)).toBe("/");
});

test("dots cannot climb to another site", () => {
	expect(sameSitePath("/a/../..//evil.example")).toBe("/");
});

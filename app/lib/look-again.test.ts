import { expect, test } from "vitest";
import { lookAgain } from "./look-again.ts";

test.each([
	[409, false, true],
	[400, false, false],
	[undefined, true, true],
] as const)("after an answer of %s, where the router says %s", (actionStatus, defaultShouldRevalidate, again) => {
	const at = new URL("http://localhost/desk");
	const both = { currentUrl: at, nextUrl: at, currentParams: {}, nextParams: {} };
	expect(lookAgain({ ...both, actionStatus, defaultShouldRevalidate })).toBe(again);
});

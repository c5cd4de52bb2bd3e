import { expect, test } from "vitest";
import { isReader } from "./day-counts.server.ts";

const asked = (headers: Record<string, string>, method = "GET") =>
	isReader(new Request("https://survey.example/reports/plums-2026", { method, headers }));
const browser = "Mozilla/5.0 (Windows NT 10.0; Win64; x64; rv:140.0) Gecko/20100101 Firefox/140.0";

test("a person's browser reads; robots, programs without a name, and what is fetched ahead do not", () => {
	expect(asked({ "user-agent": browser })).toBe(true);
	expect(asked({ "user-agent": "Mozilla/5.0 (compatible; Examplebot/2.1; +https://bot.example/)" })).toBe(false);
	expect(asked({ "user-agent": "Mozilla/5.0 (X11; Linux x86_64) HeadlessChrome/140.0.0.0 Safari/537.36" })).toBe(false);
	expect(asked({})).toBe(false);
	expect(asked({ "user-agent": browser, "sec-purpose": "prefetch;prerender" })).toBe(false);
	expect(asked({ "user-agent": browser }, "HEAD")).toBe(false);
});

import { expect, test } from "vitest";
import { atomFeed } from "./atom.ts";

const entry = {
	address: "https://x.example/reports/a",
	title: "Loss & <gain>",
	summary: 'He said "38%"\u0000',
	author: "Del",
	published: "2026-01-01T00:00:00.000Z",
	updated: "2026-02-01T00:00:00.000Z",
	pdfAddress: null,
};
const feed = {
	language: "en",
	title: "Reports",
	address: "https://x.example/reports",
	selfAddress: "https://x.example/f",
};

test("whatever a title holds, the feed stays well-formed, and is as new as its newest entry", () => {
	const made = atomFeed({ ...feed, entries: [{ ...entry, updated: "2026-01-05T00:00:00.000Z" }, entry] });
	expect(made).toContain("<title>Loss &amp; &lt;gain&gt;</title>");
	expect(made).toContain("He said &quot;38%&quot;</summary>");
	expect(made.indexOf("<updated>2026-02-01")).toBeLessThan(made.indexOf("<entry>"));
});

test("a feed of nothing is still a feed", () => {
	expect(atomFeed({ ...feed, entries: [] })).toContain("<updated>1970-01-01T00:00:00.000Z</updated>");
});

export type FeedEntry = {
	address: string;
	title: string;
	summary: string;
	author: string;
	/** ISO moments: of the first version, and of the latest. */
	published: string;
	updated: string;
	pdfAddress: string | null;
};
export type Feed = { language: string; title: string; address: string; selfAddress: string; entries: FeedEntry[] };

/** Published reports as an Atom feed (RFC 4287). A report's address is its id, so that a correction updates its entry. */
export function atomFeed({ language, title, address, selfAddress, entries }: Feed): string {
	const updated =
		entries
			.map((entry) => entry.updated)
			.toSorted()
			.at(-1) ?? "1970-01-01T00:00:00.000Z";
	return [
		`<?xml version="1.0" encoding="utf-8"?>`,
		`<feed xmlns="http://www.w3.org/2005/Atom" xml:lang="${xml(language)}">`,
		`<id>${xml(selfAddress)}</id>`,
		`<title>${xml(title)}</title>`,
		`<updated>${xml(updated)}</updated>`,
		`<link rel="self" type="application/atom+xml" href="${xml(selfAddress)}"/>`,
		`<link rel="alternate" type="text/html" href="${xml(address)}"/>`,
		...entries.map((entry) => entryOf(entry, language)),
		`</feed>`,
		"",
	].join("\n");
}

function entryOf(
	{ address, title, summary, author, published, updated, pdfAddress }: FeedEntry,
	language: string,
): string {
	return [
		`<entry>`,
		`<id>${xml(address)}</id>`,
		`<title>${xml(title)}</title>`,
		`<published>${xml(published)}</published>`,
		`<updated>${xml(updated)}</updated>`,
		`<author><name>${xml(author)}</name></author>`,
		`<link rel="alternate" type="text/html" hreflang="${xml(language)}" href="${xml(address)}"/>`,
		...(pdfAddress ? [`<link rel="enclosure" type="application/pdf" href="${xml(pdfAddress)}"/>`] : []),
		`<summary>${xml(summary)}</summary>`,
		`</entry>`,
	].join("\n");
}

/** Text as XML takes it; characters that XML has no place for are left out. */
function xml(text: string): string {
	const entities: Record<string, string> = { "&": "&amp;", "<": "&lt;", ">": "&gt;", '"': "&quot;" };
	return text.replace(noXml, "").replace(/[&<>"]/g, (sign) => entities[sign] ?? "");
}
// oxlint-disable-next-line no-control-regex -- control characters are what is taken out
const noXml = /[\u0000-\u0008\u000b\u000c\u000e-\u001f\ufffe\uffff]/g;

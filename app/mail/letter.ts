/** One paragraph of a letter: plain words, or a link that stands out as a button. */
export type Paragraph = string | { link: string; label: string };
export type Letter = {
	language: string;
	subject: string;
	heading: string;
	paragraphs: Paragraph[];
	footer: string;
	/** Where what is sent can be chosen anew. */
	change?: { link: string; label: string };
	/** The last line: where mail of this kind is stopped. */
	stop: { link: string; label: string } | null;
};

/** The letter as plain text: what a reader without HTML sees, with every address written out. */
export function asText({ paragraphs, footer, change, stop }: Letter): string {
	const body = paragraphs.map((paragraph) =>
		typeof paragraph === "string" ? paragraph : `${paragraph.label}:\n${paragraph.link}`,
	);
	const ways = [change, stop].flatMap((way) => (way ? [`${way.label}:`, way.link] : []));
	return `${[...body, ["-- ", footer, ...ways].join("\n")].join("\n\n")}\n`;
}

/**
 * The letter as HTML, in one column, readable without pictures and with styles off. Every word in it is escaped. Colours
 * stand inline, as many programs drop style sheets; those that keep them, and are set to dark, get dark ones.
 */
export function asHtml({ language, subject, heading, paragraphs, footer, change, stop }: Letter): string {
	const body = paragraphs.map((paragraph) =>
		typeof paragraph === "string" ? `<p style="${style.text}">${withBreaks(paragraph)}</p>` : button(paragraph),
	);
	const end = [change, stop].map((way) => (way ? `<br>${anchor(way, way.label)}` : "")).join("");
	return [
		`<!doctype html>`,
		`<html lang="${escapeHtml(language)}">`,
		`<head><meta charset="utf-8"><meta name="viewport" content="width=device-width, initial-scale=1">`,
		`<meta name="color-scheme" content="light dark"><meta name="supported-color-schemes" content="light dark">`,
		`<title>${escapeHtml(subject)}</title><style>${dark}</style></head>`,
		`<body class="page" style="${style.page}"><div lang="${escapeHtml(language)}" style="${style.column}">`,
		`<h1 style="${style.heading}">${escapeHtml(heading)}</h1>`,
		...body,
		`<p class="footer" style="${style.footer}">${withBreaks(footer)}${end}</p>`,
		`</div></body></html>`,
	].join("\n");
}

/** A link that stands out, with its address written out below for who reads on another device. */
function button({ link, label }: { link: string; label: string }): string {
	const address = escapeHtml(link);
	return [
		`<p style="${style.text}"><a class="button" href="${address}" style="${style.button}">${escapeHtml(label)}</a></p>`,
		`<p style="${style.small}">${anchor({ link }, link)}</p>`,
	].join("\n");
}

function anchor({ link }: { link: string }, words: string): string {
	return `<a class="link" href="${escapeHtml(link)}" style="${style.link}">${escapeHtml(words)}</a>`;
}

export function escapeHtml(text: string): string {
	const entities: Record<string, string> = { "&": "&amp;", "<": "&lt;", ">": "&gt;", '"': "&quot;", "'": "&#39;" };
	return text.replace(/[&<>"']/g, (character) => entities[character]!);
}

function withBreaks(text: string): string {
	return escapeHtml(text).replaceAll("\n", "<br>");
}

/** A name as it may stand in a mail's header: a line break in it would begin a header of the writer's choice. */
export function headerText(text: string): string {
	// oxlint-disable-next-line no-control-regex -- control characters are what is taken out
	return text.replace(/[\u0000-\u001f\u007f\u2028\u2029]+/g, " ").trim();
}

const font = "font-family:'Noto Sans',system-ui,sans-serif";
const style = {
	page: "margin:0;background:#ffffff;color:#1E2A26",
	column: "max-width:34em;margin:0 auto;padding:24px 16px",
	heading: `${font};font-size:22px;line-height:1.3;overflow-wrap:anywhere;margin:0 0 16px`,
	text: `${font};font-size:17px;line-height:1.55;margin:0 0 16px`,
	small: `${font};font-size:14px;line-height:1.5;margin:0 0 16px;word-break:break-all`,
	link: "color:#5B2A5E",
	button:
		"display:inline-block;background:#5B2A5E;color:#ffffff;text-decoration:none;padding:14px 22px;border-radius:4px;font-weight:bold",
	footer: `${font};font-size:14px;line-height:1.5;color:#4A5752;border-top:1px solid #C9D2CD;margin:24px 0 0;padding-top:12px`,
};
/** Only with these does a program that darkens mail keep plum on black readable. */
const dark = `@media (prefers-color-scheme: dark) {
.page { background: #141B18 !important; color: #E4EAE7 !important; }
.footer { color: #B3BFBA !important; border-top-color: #3A4742 !important; }
.link { color: #D9A9DC !important; }
.button { background: #D9A9DC !important; color: #1E2A26 !important; }
}`;

/** One paragraph of a letter: plain words, or a link that stands out as a button. */
export type Paragraph = string | { link: string; label: string };
export type Letter = { language: string; subject: string; heading: string; paragraphs: Paragraph[]; footer: string };

/** The letter as plain text: what a reader without HTML sees, with every address written out. */
export function asText({ paragraphs, footer }: Letter): string {
	const body = paragraphs.map((paragraph) =>
		typeof paragraph === "string" ? paragraph : `${paragraph.label}:\n${paragraph.link}`,
	);
	return `${[...body, "-- ", footer].join("\n\n").replace("-- \n\n", "-- \n")}\n`;
}

/** The letter as HTML, in one column, readable without pictures and with styles off. Every word in it is escaped. */
export function asHtml({ language, subject, heading, paragraphs, footer }: Letter): string {
	const body = paragraphs.map((paragraph) =>
		typeof paragraph === "string" ? `<p style="${style.text}">${withBreaks(paragraph)}</p>` : button(paragraph),
	);
	return [
		`<!doctype html>`,
		`<html lang="${escapeHtml(language)}">`,
		`<head><meta charset="utf-8"><meta name="viewport" content="width=device-width"><title>${escapeHtml(subject)}</title></head>`,
		`<body style="${style.page}"><div style="${style.column}">`,
		`<h1 style="${style.heading}">${escapeHtml(heading)}</h1>`,
		...body,
		`<p style="${style.footer}">${withBreaks(footer)}</p>`,
		`</div></body></html>`,
	].join("\n");
}

function button({ link, label }: { link: string; label: string }): string {
	const address = escapeHtml(link);
	return [
		`<p style="${style.text}"><a href="${address}" style="${style.button}">${escapeHtml(label)}</a></p>`,
		`<p style="${style.small}"><a href="${address}" style="${style.link}">${address}</a></p>`,
	].join("\n");
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
	heading: `${font};font-size:22px;line-height:1.3;margin:0 0 16px`,
	text: `${font};font-size:17px;line-height:1.55;margin:0 0 16px`,
	small: `${font};font-size:14px;line-height:1.5;margin:0 0 16px;word-break:break-all`,
	link: "color:#5B2A5E",
	button:
		"display:inline-block;background:#5B2A5E;color:#ffffff;text-decoration:none;padding:14px 22px;border-radius:4px;font-weight:bold",
	footer: `${font};font-size:14px;line-height:1.5;color:#4A5752;border-top:1px solid #C9D2CD;margin:24px 0 0;padding-top:12px`,
};

import { escape, page } from "../page.ts";
import type { Message } from "./store.ts";

const perPage = 50;
const notice = `<p class="notice">This inbox stands in for everybody's mailbox. Mail that the demo sends ends here and reaches nobody; it is
forgotten when the demo stops.</p>`;

const time = new Intl.DateTimeFormat("en-US", { dateStyle: "medium", timeStyle: "medium" });
const when = (message: Message) =>
	`<time datetime="${message.receivedAt}">${escape(time.format(new Date(message.receivedAt)))}</time>`;

function row(message: Message): string {
	return `<li><a href="/messages/${message.id}"><strong>${escape(message.subject || "(no subject)")}</strong>
<span>to ${escape(message.to.join(", "))}, ${when(message)}</span></a></li>`;
}

function turnPages(to: string, shown: number, pages: number): string {
	const link = (target: number, words: string) =>
		target < 1 || target > pages
			? ""
			: `<a href="/?${escape(String(new URLSearchParams({ to, page: String(target) })))}">${words}</a>`;
	return pages < 2
		? ""
		: `<nav aria-label="Pages"><p>Page ${shown} of ${pages} ${link(shown - 1, "Newer")} ${link(shown + 1, "Older")}</p></nav>`;
}

/** @param messages those that the search found, newest first. */
export function inboxPage(messages: Message[], to: string, wanted: number): string {
	const pages = Math.max(1, Math.ceil(messages.length / perPage));
	const shown = Math.min(Math.max(1, wanted), pages);
	const rows = messages.slice((shown - 1) * perPage, shown * perPage).map(row);
	const count = messages.length === 1 ? "1 message" : `${messages.length} messages`;
	const none = to ? "No mail to this address yet." : "No mail yet. It appears here when the demo sends some.";
	return page(
		"en",
		"Demo inbox",
		`<h1>Demo inbox</h1>${notice}
<form action="/" method="get" role="search"><label for="to">Address, or a part of it</label>
<input id="to" name="to" value="${escape(to)}" autocomplete="off"> <button>Search</button></form>
<p>${count}${to ? ` to addresses with “${escape(to)}”` : ""}</p>
${rows.length ? `<ul class="rows">${rows.join("\n")}</ul>` : `<p class="quiet">${none}</p>`}
${turnPages(to, shown, pages)}`,
	);
}

/** Escaped text whose web addresses can be followed. */
function linked(text: string): string {
	return text
		.split(/(https?:\/\/[^\s<>"]+[^\s<>".,;:!?)])/)
		.map((part, index) => (index % 2 ? `<a href="${escape(part)}" rel="noreferrer">${escape(part)}</a>` : escape(part)))
		.join("");
}

export function messagePage(message: Message): string {
	const headers = Object.entries(message.headers).map(
		([key, value]) => `<dt>${escape(key)}</dt><dd>${escape(value)}</dd>`,
	);
	const html = message.html
		? `<h2>As HTML</h2><iframe title="The message as HTML" src="/messages/${message.id}/html"
sandbox="allow-popups allow-popups-to-escape-sandbox"></iframe>`
		: "";
	return page(
		"en",
		message.subject || "(no subject)",
		`<p><a href="/">All mail</a></p><h1>${escape(message.subject || "(no subject)")}</h1>${notice}
<p>From ${escape(message.from)} to ${escape(message.to.join(", "))}, ${when(message)}</p>
<h2>As text</h2><pre>${linked(message.text)}</pre>${html}
<h2>Headers</h2><dl>${headers.join("\n")}</dl>`,
	);
}

export function missingPage(): string {
	return page(
		"en",
		"No such message",
		`<h1>No such message</h1><p>It is not here any more. <a href="/">All mail</a></p>`,
	);
}

// The look that the fakes' pages share, apart from the product's, so that nobody takes a stand-in for the real thing.

/** Text made harmless for HTML, in content and in quoted attributes. */
export function escape(text: string): string {
	const entities: Record<string, string> = { "&": "&amp;", "<": "&lt;", ">": "&gt;", '"': "&quot;", "'": "&#39;" };
	return text.replace(/[&<>"']/g, (sign) => entities[sign] ?? sign);
}

const style = `
:root { color-scheme: light dark; --paper: #fff; --ink: #1e2a26; --quiet: #55605b; --rule: #c9cfcc; --damson: #5b2a5e; }
@media (prefers-color-scheme: dark) {
	:root { --paper: #161d1a; --ink: #e9eeeb; --quiet: #a9b4af; --rule: #3a4540; --damson: #d9a9dc; }
}
* { box-sizing: border-box; }
body { margin: 0; background: var(--paper); color: var(--ink); font: 1rem/1.5 "Noto Sans", system-ui, sans-serif; }
main { max-width: 46rem; margin: 0 auto; padding: 1.5rem 1rem 4rem; }
h1 { font-size: 1.6rem; line-height: 1.25; margin: .5rem 0; }
h2 { font-size: 1.1rem; margin: 2rem 0 .5rem; }
a { color: var(--damson); }
:focus-visible { outline: 3px solid #e0a526; outline-offset: 2px; }
.notice { border: 2px solid var(--damson); padding: .75rem 1rem; margin: 1rem 0; }
.quiet { color: var(--quiet); }
ul.rows { list-style: none; margin: 0; padding: 0; border-top: 1px solid var(--rule); }
ul.rows > li { border-bottom: 1px solid var(--rule); }
ul.rows a { display: block; min-height: 44px; padding: .65rem .25rem; text-decoration: none; overflow-wrap: anywhere; }
ul.rows a:hover strong, ul.rows a:focus-visible strong { text-decoration: underline; }
ul.rows span { display: block; color: var(--quiet); }
label { display: block; font-weight: 600; margin-top: .75rem; }
input { width: 100%; max-width: 26rem; min-height: 44px; padding: .4rem .6rem; font: inherit; color: inherit;
	background: var(--paper); border: 1px solid var(--quiet); }
button, .button { display: inline-block; min-height: 44px; margin-top: .9rem; padding: .55rem 1.1rem; font: inherit; font-weight: 600;
	color: var(--paper); background: var(--damson); border: 0; text-decoration: none; cursor: pointer; }
.problem { color: #a3261b; font-weight: 600; margin: .25rem 0 0; }
@media (prefers-color-scheme: dark) { .problem { color: #ffb4a8; } }
pre { white-space: pre-wrap; overflow-wrap: anywhere; border-top: 1px solid var(--rule); padding-top: .75rem; font: inherit; }
dl { display: grid; grid-template-columns: max-content 1fr; gap: .2rem 1rem; } dd { margin: 0; overflow-wrap: anywhere; }
iframe { width: 100%; height: 32rem; border: 1px solid var(--rule); background: #fff; }
`;

/** A whole page; `body` is HTML, already escaped where it holds what people wrote. */
export function page(language: string, title: string, body: string): string {
	return `<!doctype html>
<html lang="${escape(language)}">
<head>
<meta charset="utf-8">
<meta name="viewport" content="width=device-width, initial-scale=1">
<title>${escape(title)}</title>
<link rel="icon" href="data:,">
<style>${style}</style>
</head>
<body><main>${body}</main></body>
</html>
`;
}

/** Nothing but the page's own style; `formAction` where a form leads on to another origin. */
export function securityPolicy({ formAction = "'self'", frames = "'none'" } = {}): string {
	return [
		"default-src 'none'",
		"style-src 'unsafe-inline'",
		"img-src data:",
		`frame-src ${frames}`,
		`form-action ${formAction}`,
		"base-uri 'none'",
		"frame-ancestors 'none'",
	].join("; ");
}

/**
 * A path of this site that a request may send one back to, or the fallback. Anything that a browser could read as another
 * site is refused: `//host`, `/\host`, a scheme, control characters that browsers drop.
 */
export function sameSitePath(value: unknown, fallback = "/"): string {
	if (typeof value !== "string" || value.length > 2000) return fallback;
	// oxlint-disable-next-line no-control-regex -- control characters are what is looked for
	if (!/^\/(?![/\\])/.test(value) || /[\u0000-\u001f\u007f\\]/.test(value)) return fallback;
	const base = "https://this.site.invalid";
	if (!URL.canParse(value, base)) return fallback;
	const url = new URL(value, base);
	// Dots are resolved by now: `/a/..//host` has become `//host`.
	if (url.origin !== base || url.pathname.startsWith("//")) return fallback;
	return url.pathname + url.search + url.hash;
}

/**
 * A text as it is kept: trimmed, composed (NFC), line ends as \n, without control characters other than line ends and
 * tabs. Half of a surrogate pair, which no database stores, becomes the replacement character. Marks of any language
 * of markup are text like other text.
 */
export function cleanText(typed: string): string {
	return typed
		.replace(/\r\n?/g, "\n")
		.replace(/(?![\n\t])\p{Cc}/gu, "")
		.replace(/\p{Cs}/gu, "\ufffd")
		.normalize("NFC")
		.trim();
}

/** Length as a reader counts it, in code points: an emoji is one and not two. */
export function lengthOf(text: string): number {
	return [...text].length;
}

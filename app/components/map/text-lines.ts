/** Shares of the type size that letters of Noto Sans are wide on average, a little more than they are: no line runs over. */
const meanWidth = { regular: 0.56, bold: 0.61 };

/** Breaks a text at its spaces into lines that fit a width, for drawings, which break nothing by themselves. */
export function textLines(text: string, width: number, size: number, weight: keyof typeof meanWidth): string[] {
	const most = Math.max(8, Math.floor(width / (size * meanWidth[weight])));
	const lines: string[] = [];
	for (const word of text.split(" ").filter(Boolean)) {
		const last = lines.at(-1);
		if (last !== undefined && last.length + 1 + word.length <= most) lines[lines.length - 1] = `${last} ${word}`;
		else lines.push(word);
	}
	return lines;
}

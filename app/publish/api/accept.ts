/**
 * The type to answer with out of those that can be (RFC 9110, section 12.5.1), or undefined where the asker takes none. Of
 * types that are liked alike the first of `types` is taken, as where nothing is said.
 */
export function chosenType(accept: string | null, types: readonly string[]): string | undefined {
	if (accept === null || accept.trim() === "") return types[0];
	const ranges = accept.split(",").map(rangeOf);
	const liked = types.map((type) => ({ type, quality: qualityOf(type, ranges) }));
	const best = Math.max(...liked.map(({ quality }) => quality));
	return best > 0 ? liked.find(({ quality }) => quality === best)?.type : undefined;
}

type Range = { type: string; quality: number };

function rangeOf(text: string): Range {
	const [type = "", ...parameters] = text.split(";").map((part) => part.trim().toLowerCase());
	const weight = parameters.find((part) => part.startsWith("q="));
	const quality = weight === undefined ? 1 : Number(weight.slice(2));
	return { type, quality: Number.isFinite(quality) ? quality : 0 };
}

/** The most exact range that names the type decides, also where it says "not this one". */
function qualityOf(type: string, ranges: Range[]): number {
	const family = `${type.split("/")[0]}/*`;
	for (const wanted of [type, family, "*/*"]) {
		const found = ranges.find((range) => range.type === wanted);
		if (found) return found.quality;
	}
	return 0;
}

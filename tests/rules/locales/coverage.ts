import type { Entry } from "./texts.ts";
import type { Use, Uses } from "./uses.ts";

type Entries = Map<string, Entry>;

/** Uses of keys that no text stands behind, or that leave a text's placeholders unfilled. */
export function wrongUses(uses: Uses, entries: Entries): string[] {
	return uses.named.flatMap((use) => {
		const found = entriesFor(use, entries);
		const written = `${use.namespace ?? "*"}:${use.parts.join("${…}")}`;
		if (found.length === 0) return [`${use.at} ${written}: no such key`];
		if (use.parts.length > 1 || use.given === null) return [];
		return found.flatMap((entry) => {
			const needed = new Set([...entry.placeholders, ...(entry.forms.size > 1 ? ["count"] : [])]);
			const missing = [...needed].filter((name) => /^\w+$/.test(name) && !use.given!.has(name));
			return missing.length > 0 ? [`${use.at} ${written}: not given ${missing.join(", ")}`] : [];
		});
	});
}

/** Keys that nothing in the code comes to. What fills a hole must at least be a word of the code. */
export function unusedKeys(uses: Uses, entries: Entries): string[] {
	const keys = [...entries.keys()];
	const exact = new Set(uses.named.filter(({ parts }) => parts.length === 1).map(fullKey));
	const patterns = uses.named.filter(({ parts }) => parts.length > 1);
	return keys.filter((key) => {
		const [namespace, bare] = key.split(":") as [string, string];
		if (exact.has(key) || exact.has(`*:${bare}`)) return false;
		if (bare.includes(".") && uses.mentioned.has(bare)) return false;
		return !patterns.some((use) => fits(use, namespace) && fills(bare, use.parts, (word) => uses.words.has(word)));
	});
}

const fullKey = ({ namespace, parts }: Use) => `${namespace ?? "*"}:${parts[0]}`;
const fits = (use: Use, namespace: string) => use.namespace === null || use.namespace === namespace;

function entriesFor(use: Use, entries: Entries): Entry[] {
	const exact = use.parts.length === 1 && use.namespace ? entries.get(fullKey(use)) : undefined;
	if (exact) return [exact];
	return [...entries.values()].filter(({ key }) => {
		const [namespace, bare] = key.split(":") as [string, string];
		return fits(use, namespace) && fills(bare, use.parts, () => true);
	});
}

/** Whether a key is the parts with a word in each hole; a word holds no dot. */
function fills(key: string, parts: string[], isWord: (word: string) => boolean): boolean {
	const [first, ...rest] = parts as [string, ...string[]];
	if (!key.startsWith(first)) return false;
	const after = key.slice(first.length);
	if (rest.length === 0) return after === "";
	for (let end = 1; end <= after.length && !after.slice(0, end).includes("."); end++) {
		if (isWord(after.slice(0, end)) && fills(after.slice(end), rest, isWord)) return true;
	}
	return false;
}

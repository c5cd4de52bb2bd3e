import { readdir, readFile } from "node:fs/promises";
import { join } from "node:path";

/** The texts of one language by full key (`desk:today.title`), plural forms each by their own. */
export type Texts = Map<string, string>;

/** A key as code writes it, with the plural forms that stand behind it. A text without forms has the one form "". */
export type Entry = { key: string; forms: Map<string, string>; placeholders: Set<string> };

const pluralForm = /^(.+)_(zero|one|two|few|many|other)$/;

export async function readTexts(folder: string): Promise<Texts> {
	const texts: Texts = new Map();
	for (const file of (await readdir(folder)).toSorted()) {
		const words: unknown = JSON.parse(await readFile(join(folder, file), "utf8"));
		flatten(words, `${file.replace(/\.json$/, "")}:`, texts);
	}
	return texts;
}

function flatten(words: unknown, at: string, texts: Texts): void {
	if (typeof words === "string") {
		texts.set(at, words);
		return;
	}
	if (typeof words !== "object" || words === null || Array.isArray(words)) throw new TypeError(`${at} holds no text`);
	for (const [name, inner] of Object.entries(words))
		flatten(inner, at.endsWith(":") ? at + name : `${at}.${name}`, texts);
}

/** Joins plural forms to the key that code writes. `x_one` is a form only where there is `x_other` too. */
export function entriesOf(texts: Texts): Map<string, Entry> {
	const entries = new Map<string, Entry>();
	for (const [fullKey, text] of texts) {
		const match = pluralForm.exec(fullKey);
		const isForm = match !== null && texts.has(`${match[1]}_other`);
		const key = isForm ? match[1]! : fullKey;
		const entry = entries.get(key) ?? { key, forms: new Map(), placeholders: new Set() };
		entry.forms.set(isForm ? match[2]! : "", text);
		for (const placeholder of placeholdersIn(text)) entry.placeholders.add(placeholder);
		entries.set(key, entry);
	}
	return entries;
}

/** What a text leaves open: values, texts of other keys, and tags around a part of it. */
export function placeholdersIn(text: string): string[] {
	return [...text.matchAll(/\{\{\s*([^},\s]+)[^}]*\}\}|\$t\([^)]*\)|<\/?\w+\s*\/?>/g)].map(
		(match) => match[1] ?? match[0],
	);
}

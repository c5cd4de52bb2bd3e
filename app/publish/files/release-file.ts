import type { TFunction } from "i18next";
import type { Language } from "#app/i18n/language.ts";
import type { DataRecord } from "../data-file.ts";
import type { Release, ReleaseArea, ReleaseMeasure } from "../release.ts";

/** A file as it is kept and served, byte for byte. */
export type ReleaseFile = { name: string; mediaType: string; content: Uint8Array };

/** Everything that the files of a release are made from: what the reader's role can see, and words for it. */
export type FileSource = {
	release: Release;
	measures: readonly ReleaseMeasure[];
	areas: readonly ReleaseArea[];
	crops: readonly string[];
	records: readonly DataRecord[];
	/** The data room's words in each language. */
	words: Record<Language, TFunction>;
	/** Where the release's page is, such as https://example.org/data/3. */
	address: string;
};

export const csvType = "text/csv; charset=utf-8; header=present";

export function textFile(name: string, mediaType: string, text: string): ReleaseFile {
	return { name, mediaType, content: new TextEncoder().encode(text) };
}

export function jsonFile(name: string, mediaType: string, value: unknown): ReleaseFile {
	return textFile(name, mediaType, `${JSON.stringify(value, null, "\t")}\n`);
}

/** One name in both languages. */
export function inBoth(words: FileSource["words"], key: string): { en: string; es: string } {
	return { en: words.en(key), es: words.es(key) };
}

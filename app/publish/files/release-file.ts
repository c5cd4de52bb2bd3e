import type { TFunction } from "i18next";
import type { Language } from "#app/i18n/language.ts";
import { groupBy } from "#app/lib/group-by.ts";
import type { Words } from "#app/lib/words.ts";
import type { KeptForm } from "../asked-form.server.ts";
import type { DataRecord } from "../data-file.ts";
import type { Release, ReleaseArea, ReleaseMeasure } from "../release.ts";

/** A file as it is kept and served, byte for byte. */
export type ReleaseFile = { name: string; mediaType: string; content: Uint8Array };

/** One release with the measures and areas that are told of it. */
export type FilePart = {
	release: Release;
	measures: readonly ReleaseMeasure[];
	areas: readonly ReleaseArea[];
	/** All of its areas: what is wider than a county is outlined by its counties. */
	outlined: readonly ReleaseArea[];
	/** The questions as they were asked; null where they were not kept. */
	asked: KeptForm | null;
};

/** Everything that files are made from: what the reader's role can see, and words for it. */
export type FileSource = {
	/** The release whose files these are; of a table each release that has cells in it, in the order of the rows. */
	parts: readonly FilePart[];
	/** A table can have cells of several releases, so its rows and codes are told apart by release too. */
	isTable: boolean;
	/** The folder of the archive, and the package's name. */
	name: string;
	/** The structure's id in SDMX. */
	structureId: string;
	title: Words;
	about: Words;
	codebookTitle: Words;
	/** When the latest of it was published: the same source gives the same files, whenever they are made. */
	publishedAt: string;
	version: string;
	crops: readonly string[];
	records: readonly DataRecord[];
	/** The data room's words in each language. */
	words: Record<Language, TFunction>;
	/** Where its page is, such as https://example.org/data/3. */
	address: string;
	/** On what terms it may be used, and the address of its licence where the network names one. */
	terms: Words;
	license: string | null;
	/** What besides belongs to it. */
	besides: readonly ReleaseFile[];
};

/** What the releases tell, each thing once with the releases that tell it so. */
export function distinctOf<T>(
	{ parts }: Pick<FileSource, "parts">,
	read: (part: FilePart) => readonly T[],
): { item: T; releases: number[] }[] {
	const all = parts.flatMap((part) => read(part).map((item) => ({ item, number: part.release.number })));
	return [...groupBy(all, ({ item }) => JSON.stringify(item)).values()].map((alike) => ({
		item: alike[0]!.item,
		releases: alike.map(({ number }) => number),
	}));
}

/** A measure as it is defined: whose season it is, is the release's to say. */
export const definitionsOf = ({ measures }: FilePart) =>
	measures.map(({ key, label, description, kind, unit, decimals }) => {
		return { key, label, description, kind, unit, decimals };
	});

export const csvType = "text/csv; charset=utf-8; header=present";

export function textFile(name: string, mediaType: string, text: string): ReleaseFile {
	return { name, mediaType, content: new TextEncoder().encode(text) };
}

export function jsonFile(name: string, mediaType: string, value: unknown): ReleaseFile {
	return textFile(name, mediaType, `${JSON.stringify(value, null, "\t")}\n`);
}

/** One text in both languages. */
export function inBoth(words: FileSource["words"], key: string, values: Record<string, string | number> = {}): Words {
	return { en: words.en(key, values), es: words.es(key, values) };
}

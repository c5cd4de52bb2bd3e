import { z } from "zod";

/** A text in both languages as it stands in a draft: either may still be empty. */
export const DraftWords = z.object({ en: z.string().default(""), es: z.string().default("") });
export type DraftWords = z.infer<typeof DraftWords>;

const id = z.string().regex(/^[a-z0-9]{1,24}$/);
const measure = z.string().regex(/^[a-z][a-z0-9_.]{0,79}$/);
const crop = z.string().regex(/^[a-z_]{1,40}$/);
const area = z.string().regex(/^[A-Za-z0-9_-]{1,40}$/);

export const cautionKeys = ["damaged_fruit", "pesticide", "frost_protection", "station_air", "local_advice"] as const;
export type CautionKey = (typeof cautionKeys)[number];
export const tableKinds = ["county", "district", "state"] as const;
/** Crops as bars, areas as dots, seasons as a line, days as strips, and a loss with what took it. */
export const chartKinds = ["crops", "areas", "seasons", "windows", "causes"] as const;
export type ChartKind = (typeof chartKinds)[number];

/** The blocks of a report. None holds a typed figure: numbers are addresses into the report's release. */
export const Block = z.discriminatedUnion("type", [
	z.object({ id, type: z.literal("heading"), text: DraftWords }),
	z.object({ id, type: z.literal("text"), text: DraftWords }),
	z.object({ id, type: z.literal("figure"), measure, crop, area }),
	z.object({ id, type: z.literal("map"), measure, crop }),
	z.object({ id, type: z.literal("table"), measure, crop, kind: z.enum(tableKinds) }),
	z.object({ id, type: z.literal("crops"), measure, area }),
	z.object({
		id,
		type: z.literal("chart"),
		chart: z.enum(chartKinds),
		measure,
		crop,
		area,
		kind: z.enum(["district", "state"]),
	}),
	z.object({ id, type: z.literal("caution"), key: z.enum(cautionKeys) }),
	/** A photo that consent was given for, by its id, empty until one is chosen; `alt` says what it shows to who cannot see it. */
	z.object({ id, type: z.literal("photo"), photo: z.uuid().or(z.literal("")).default(""), alt: DraftWords }),
]);
export type Block = z.infer<typeof Block>;
export type BlockType = Block["type"];
export const blockTypes = [
	"heading",
	"text",
	"figure",
	"map",
	"table",
	"crops",
	"chart",
	"caution",
	"photo",
] as const satisfies BlockType[];

export const ReportContent = z.object({
	title: DraftWords,
	summary: DraftWords,
	blocks: z.array(Block).max(60).default([]),
});
export type ReportContent = z.infer<typeof ReportContent>;

/** Of the report's own season, of the one before it, or the mean of up to five seasons before it. */
export const eras = ["last", "mean"] as const;
export type Reference = { measure: string; crop: string; area: string; when?: (typeof eras)[number] };
export type TextPart = { kind: "text"; text: string } | { kind: "reference"; reference: Reference };

const referencePattern = /\[\[([a-z][a-z0-9_.]{0,79})\|([a-z_]{1,40})\|([A-Za-z0-9_-]{1,40})(?:\|(last|mean))?\]\]/g;

function toReference([, m = "", c = "", a = "", when]: RegExpExecArray): Reference {
	return { measure: m, crop: c, area: a, ...(when && { when: when as Reference["when"] }) };
}

/**
 * A text with its references taken apart: `[[crop_loss|apple|network]]` stands for that figure of the release, with `|last`
 * for the same of the season before, and `[[cells|withheld|county]]` for how many cells of a kind are withheld.
 */
export function partsOf(text: string): TextPart[] {
	const parts: TextPart[] = [];
	let end = 0;
	for (const match of text.matchAll(referencePattern)) {
		if (match.index > end) parts.push({ kind: "text", text: text.slice(end, match.index) });
		parts.push({ kind: "reference", reference: toReference(match) });
		end = match.index + match[0].length;
	}
	if (end < text.length) parts.push({ kind: "text", text: text.slice(end) });
	return parts;
}

/** A text with a mark in place of each reference, and the references by the marks' numbers. */
export function takenApart(text: string, mark: (index: number) => string) {
	const references: Reference[] = [];
	const marked = partsOf(text).map((part) =>
		part.kind === "text" ? part.text : mark(references.push(part.reference) - 1),
	);
	return { marked: marked.join(""), references };
}

export const referenceText = ({ measure: m, crop: c, area: a, when }: Reference) =>
	`[[${[m, c, a, ...(when ? [when] : [])].join("|")}]]`;

/** What a release says of itself: cells of a kind with a status, as in `[[cells|withheld|county]]`. */
export const cellCounts = "cells";

/** A number with the sign or word after it that makes it a figure; names such as IA-3 are none. */
const typedFigure =
	/(?<![\p{L}\p{N}_.-])[-−+]?\d(?:[\d.,]*\d)?(?:\s*(?:%|°\s?[FC]?|percent|per cent|por ciento|lbs?\b|pounds?\b|libras?\b|tons?\b|toneladas?\b|bushels?\b|bu\b|kg\b|acres?\b|trees?\b|árbol(?:es)?\b))?/giu;
const year = /^(?:19|20)\d\d$/;
/** Addresses of links and the numbers of a list say nothing of the season. */
const noProse = /\]\([^)]*\)|<?https?:\/\/\S+|^\s{0,3}\d{1,3}[.)](?=\s)/gmu;

/** Numbers typed by hand, which would not follow a revision of the release: "38%", "in 3 counties", "April 24". Years may be. */
export function typedFigures(text: string): string[] {
	const prose = text.replace(referencePattern, " ").replace(noProse, " ");
	return [...prose.matchAll(typedFigure)].map(([found]) => found.trim()).filter((found) => !year.test(found));
}

const inWords = ({ en, es }: DraftWords) =>
	[en, es].flatMap((text) => partsOf(text).flatMap((part) => (part.kind === "reference" ? [part.reference] : [])));

/** Every figure that a report points to, in titles, texts and figure blocks. */
export function referencesOf({ title, summary, blocks }: ReportContent): Reference[] {
	const inBlocks = blocks.flatMap((block) => {
		if (block.type === "text" || block.type === "heading") return inWords(block.text);
		if (block.type === "figure") return [{ measure: block.measure, crop: block.crop, area: block.area }];
		return [];
	});
	return [...inWords(title), ...inWords(summary), ...inBlocks];
}

/** The photos that a report shows. */
export const photosOf = ({ blocks }: Pick<ReportContent, "blocks">): string[] =>
	blocks.flatMap((block) => (block.type === "photo" && block.photo ? [block.photo] : []));

/** Without photos other than those of the report itself: for others nobody gave consent here. */
export function withOwnPhotos(content: ReportContent, own: ReadonlySet<string>): ReportContent {
	const blocks = content.blocks.map((block) =>
		block.type === "photo" && !own.has(block.photo) ? { ...block, photo: "" as const } : block,
	);
	return { ...content, blocks };
}

/** The crops that a report tells of; "all" where it tells of all together, or sets all side by side. */
export function cropsOf(content: ReportContent): string[] {
	const inTexts = referencesOf(content).flatMap((one) => (one.measure === cellCounts ? [] : [one.crop]));
	const inBlocks = content.blocks.flatMap((block) => {
		const beside = block.type === "crops" || (block.type === "chart" && !["areas", "seasons"].includes(block.chart));
		return beside ? ["all"] : "crop" in block ? [block.crop] : [];
	});
	return [...new Set([...inTexts, ...inBlocks])];
}

/** Every text of a report with the name of its field in the editor's form. */
function textsOf(
	{ title, summary, blocks }: ReportContent,
	correction: DraftWords | null = null,
): [field: string, text: string][] {
	const words: [string, DraftWords][] = [
		...(correction ? [["correction", correction] satisfies [string, DraftWords]] : []),
		["title", title],
		["summary", summary],
		...blocks.flatMap((block, index): [string, DraftWords][] =>
			"text" in block
				? [[`blocks[${index}].text`, block.text]]
				: "alt" in block
					? [[`blocks[${index}].alt`, block.alt]]
					: [],
		),
	];
	return words.flatMap(([name, { en, es }]): [string, string][] => [
		[`${name}.en`, en],
		[`${name}.es`, es],
	]);
}

/**
 * What keeps a report from being submitted: texts missing in a language, a photo not chosen, and no block at all.
 * @param correction what a correction says of itself; null for a first version.
 */
export function missingWords(
	content: ReportContent,
	correction: DraftWords | null = null,
): { field: string; code: "empty" }[] {
	const missing = textsOf(content, correction).flatMap(([field, text]) => (text.trim() ? [] : [field]));
	if (content.blocks.length === 0) missing.push("blocks");
	for (const [index, block] of content.blocks.entries())
		if (block.type === "photo" && !block.photo) missing.push(`blocks[${index}].photo`);
	return missing.map((field) => ({ field, code: "empty" }));
}

/** Every number that is typed in a report, each once: whoever approves it is to see them. */
export function typedIn(content: ReportContent, correction: DraftWords | null): string[] {
	return [...new Set(textsOf(content, correction).flatMap(([, text]) => typedFigures(text)))];
}

const longestText = 8_000;

/** Texts longer than a report's page can take; they come back to the editor whole, to be shortened there. */
export function tooLongWords(content: ReportContent): { field: string; code: "too_long" }[] {
	const long = textsOf(content).filter(([, text]) => text.length > longestText);
	return long.map(([field]) => ({ field, code: "too_long" }));
}

/** A report's address from its title: "After harvest, 2025" becomes "after-harvest-2025". */
export function slugOf(title: string): string {
	const plain = title.normalize("NFD").replace(/\p{M}/gu, "").toLowerCase();
	const words = plain.split(/[^a-z0-9]+/).filter(Boolean);
	return words.join("-").slice(0, 80).replace(/-+$/, "") || "report";
}

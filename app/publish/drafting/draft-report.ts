import { isApart } from "#app/lib/likely-range.ts";
import { type Cell, type CropCell, lookOf } from "../cell.ts";
import { neededCautions } from "../cautions.ts";
import { isOfAllAlone, leadingCell, partsOfLoss, worstFirst } from "../finding.ts";
import type { Release, ReleaseMeasure } from "../release.ts";
import { type Block, cellCounts, type DraftWords, referenceText, type ReportContent } from "../report.ts";
import type { SeasonCell } from "../report-source.server.ts";

/** Says one of the draft's sentences in one language; keys are those under `report_draft` of the public words. */
export type Say = (key: string, values?: Record<string, string | number>) => string;
export type DraftInput = {
	release: Pick<Release, "season" | "title">;
	measures: ReleaseMeasure[];
	/** The crops that each measure has figures of, by its key; "all" alone where it was asked once of an operation. */
	cropsOf: Record<string, string[]>;
	/** The measure that leads the report. */
	measure: ReleaseMeasure;
	/** That measure in the whole network, crop by crop. */
	crops: CropCell[];
	/** That measure's worst crop, district by district. */
	districts: Cell[];
	/** That measure in the whole network in earlier seasons, by crop, the latest season first. */
	earlier: Record<string, SeasonCell[]>;
	/** The whole network's figures of single pests. */
	pests: { measure: ReleaseMeasure; cell: CropCell }[];
	say: { en: Say; es: Say };
};

/**
 * A first draft of a report, made of the release alone: the headline, crops side by side, what changed, where it was worst,
 * causes, pests, how much is withheld, and the cautions. Every figure in it is a reference; the associate rewrites and adds.
 */
export function draftReport(input: DraftInput): ReportContent {
	const { release, measure, crops } = input;
	const worst = leadingCell(measure, crops);
	const [, second] = worstFirst(measure, crops);
	const sentence = both(input.say);
	const about = { season: release.season };
	// What the likely ranges do not bear is never said.
	const close = worst && second && !isApart(worst, second) ? second : undefined;
	const lead = worst && {
		...about,
		crop: worst.cropKey,
		figure: referenceText({ measure: measure.key, crop: worst.cropKey, area: worst.areaKey }),
		measure: saidOf(measure),
		...(close && {
			second: close.cropKey,
			secondFigure: referenceText({ measure: measure.key, crop: close.cropKey, area: close.areaKey }),
		}),
	};
	const leading = lead ? leadOf(input, lead, Boolean(close), sentence) : sentence("noLead", about);
	const blocks: Unnamed[] = [
		{ type: "heading", text: sentence("happened") },
		{ type: "text", text: leading },
		...(worst && !isOfAllAlone(crops) ? [chart("crops", measure, worst.cropKey)] : []),
		...(worst ? besideLead(input, worst.cropKey) : []),
		...changePart(input, sentence),
		...(worst ? wherePart(input, worst.cropKey, sentence) : []),
		...(worst ? otherParts(input, worst.cropKey, sentence) : []),
		{ type: "heading", text: sentence("withheldTitle") },
		{ type: "text", text: sentence("withheld", { shown: counted("shown"), withheld: counted("withheld") }) },
		{ type: "heading", text: sentence("cautions") },
		...neededCautions(input.measures).map((key) => ({ type: "caution", key }) as const),
	];
	return {
		title: titleOf(input, sentence("title", about)),
		summary: leading,
		blocks: blocks.map((block, index) => Object.assign({ id: `b${index + 1}` }, block) as Block),
	};
}

/** Which crop stands out, or the figure of all where crops are nothing to set beside each other. Only a crop's loss names itself. */
function leadOf(
	{ measure, crops }: DraftInput,
	lead: Record<string, string | number>,
	isClose: boolean,
	sentence: Sentence,
): DraftWords {
	if (isOfAllAlone(crops)) return named(sentence("leadAll", lead), measure.label);
	const said = sentence(isClose ? "leadClose" : "lead", lead);
	return measure.key === "crop_loss" ? said : named(said, measure.label);
}

/** A season's report is that on its harvest; others say which survey they tell of. */
function titleOf({ measure, release }: DraftInput, { en, es }: DraftWords): DraftWords {
	if (measure.key === "crop_loss") return { en, es };
	return { en: `${en}: ${release.title.en}`, es: `${es}: ${release.title.es}` };
}

const counted = (status: string) => referenceText({ measure: cellCounts, crop: status, area: "county" });

function chart(kind: Extract<Block, { type: "chart" }>["chart"], measure: ReleaseMeasure, crop: string): Unnamed {
	return { type: "chart", chart: kind, measure: measure.key, crop, area: "network", kind: "district" };
}

type Sentence = (key: string, values?: Record<string, string | number>) => DraftWords;
const mostChanges = 3;

/** The crops whose figure moved furthest since the season before, beside the mean of earlier seasons where there is one. */
function changePart({ measure, crops, earlier, release }: DraftInput, sentence: Sentence): Unnamed[] {
	const leading = leadingCell(measure, crops);
	const told = isOfAllAlone(crops) && leading ? [leading] : worstFirst(measure, crops);
	const changes = told.flatMap((cell) => {
		const seasons = earlier[cell.cropKey] ?? [];
		const last = seasons.find(({ season }) => season === release.season - 1)?.cell.value;
		return typeof last === "number" ? [{ crop: cell.cropKey, by: Math.abs(cell.value - last), seasons }] : [];
	});
	const furthest = changes.toSorted((a, b) => b.by - a.by).slice(0, mostChanges);
	const [widest] = furthest;
	if (!widest) return [];
	const lines = furthest.map(({ crop, seasons }) => {
		const at = { measure: measure.key, crop, area: "network" };
		return sentence(seasons.length > 1 ? "changeMean" : "change", {
			named: crop,
			now: referenceText(at),
			last: referenceText({ ...at, when: "last" }),
			mean: referenceText({ ...at, when: "mean" }),
		});
	});
	return [
		{ type: "heading", text: sentence("changed") },
		{ type: "text", text: listed(lines) },
		chart("seasons", measure, widest.crop),
	];
}

/** Days, the causes of a loss, and the pests that were seen most. */
function otherParts(input: DraftInput, crop: string, sentence: Sentence): Unnamed[] {
	const { measures, measure, pests } = input;
	const days = daysPart(input, crop);
	const when: Unnamed[] = days.length > 0 ? [{ type: "heading", text: sentence("when") }, ...days] : [];
	const causes: Unnamed[] =
		partsOfLoss(measure, measures).length > 0
			? [{ type: "heading", text: sentence("causes") }, chart("causes", measure, crop)]
			: [];
	const seen = pests
		.filter(({ cell }) => lookOf(cell) === "number")
		.toSorted((a, b) => (b.cell.value ?? 0) - (a.cell.value ?? 0))
		.slice(0, mostPests)
		.map(({ measure: { key, label }, cell }) => ({
			figure: referenceText({ measure: key, crop: cell.cropKey, area: cell.areaKey }),
			named: cell.cropKey,
			label,
		}));
	const ofPests: Unnamed[] =
		seen.length > 0
			? [
					{ type: "heading", text: sentence("pests") },
					{ type: "text", text: listed(seen.map(({ label, ...said }) => named(sentence("pest", said), label))) },
				]
			: [];
	return [...when, ...causes, ...ofPests];
}
const mostPests = 5;

/** Days as strips crop by crop where they were asked so, the others as figures. */
function daysPart(input: DraftInput, crop: string): Unnamed[] {
	const drawn = stripsOf(input);
	const others = input.measures.filter(
		(day) => day.kind === "day" && day.key !== input.measure.key && !drawn.includes(day),
	);
	const [day] = drawn;
	return [...(day ? [chart("windows", day, crop)] : []), ...others.flatMap(({ key }) => figureOf(input, key, crop))];
}

/** Up to two other measures that are worse the same way as the leading one. */
function besideLead(input: DraftInput, crop: string): Unnamed[] {
	const { measures, measure } = input;
	const parts = partsOfLoss(measure, measures);
	return measures
		.filter(({ key }) => key !== measure.key)
		.filter((other) => other.kind !== "day" && other.worse === measure.worse && other.hue !== "pests")
		.filter((other) => !parts.includes(other))
		.slice(0, 2)
		.flatMap(({ key }) => figureOf(input, key, crop));
}

/** The whole network's figure of the leading crop, or of all where they were asked together. */
function figureOf({ cropsOf }: DraftInput, measure: string, crop: string): Unnamed[] {
	const told = [crop, "all"].find((one) => cropsOf[measure]?.includes(one));
	return told ? [{ type: "figure", measure, crop: told, area: "network" }] : [];
}

/** The days that are drawn as strips, crop by crop: two or more, if they were asked so. */
function stripsOf({ measures, cropsOf }: DraftInput): ReleaseMeasure[] {
	const days = measures.filter(({ kind, key }) => kind === "day" && cropsOf[key]?.some((crop) => crop !== "all"));
	return days.length > 1 ? days : [];
}

/** A measure's own words, which stand in the release in both languages, put before a sentence. */
const named = (words: DraftWords, label: DraftWords): DraftWords => ({
	en: `${label.en}, ${words.en}`,
	es: `${label.es}, ${words.es}`,
});
const listed = (lines: DraftWords[]): DraftWords => ({
	en: lines.map(({ en }) => `- ${en}`).join("\n"),
	es: lines.map(({ es }) => `- ${es}`).join("\n"),
});

type Unnamed = Block extends infer B ? (B extends Block ? Omit<B, "id"> : never) : never;

/** A map of the worst crop, its widest differences between districts, and each of them. */
function wherePart(input: DraftInput, crop: string, sentence: Sentence): Unnamed[] {
	const { measure, districts } = input;
	// Ordered as crops are; here there is one, which may be all of them.
	const shown = worstFirst(
		measure,
		districts.map((cell) => ({ ...cell, cropKey: "" })),
	);
	const [most, least] = [shown[0], shown.at(-1)];
	const at = (cell: Cell) => referenceText({ measure: measure.key, crop, area: cell.areaKey });
	const widest =
		most && least && most !== least
			? [
					{
						type: "text" as const,
						text: sentence("widest", {
							crop,
							most: most.areaName,
							mostFigure: at(most),
							least: least.areaName,
							leastFigure: at(least),
						}),
					},
				]
			: [];
	return [
		{ type: "heading", text: sentence("where", { measure: saidOf(measure) }) },
		{ type: "map", measure: measure.key, crop },
		...widest,
		chart("areas", measure, crop),
	];
}

/** Which sentences tell of a measure: those of days have their own, as no day is worse than another. */
function saidOf({ key, kind }: ReleaseMeasure): string {
	return kind === "day" ? "day" : key;
}

function both(say: { en: Say; es: Say }) {
	return (key: string, values?: Record<string, string | number>): DraftWords => ({
		en: say.en(key, values),
		es: say.es(key, values),
	});
}

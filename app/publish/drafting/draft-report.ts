import type { Cell, CropCell } from "../cell.ts";
import { worstFirst } from "../finding.ts";
import type { Release, ReleaseMeasure } from "../release.ts";
import { type Block, type DraftWords, referenceText, type ReportContent } from "../report.ts";

/** Says one of the draft's sentences in one language; keys are those under `report_draft` of the public words. */
export type Say = (key: string, values?: Record<string, string | number>) => string;
export type DraftInput = {
	release: Pick<Release, "season" | "title">;
	measures: ReleaseMeasure[];
	/** The measure that leads the report. */
	measure: ReleaseMeasure;
	/** That measure in the whole network, crop by crop. */
	crops: CropCell[];
	/** That measure's worst crop, district by district. */
	districts: Cell[];
	/** Counties of all crops together by status. */
	counties: { shown: number; withheld: number };
	say: { en: Say; es: Say };
};

/**
 * A first draft of a report, made of the release alone: the headline, crops side by side, where it was worst, how much is
 * withheld, and the cautions. Every figure in it is a reference; the associate rewrites and adds.
 */
export function draftReport(input: DraftInput): ReportContent {
	const { release, measure, crops } = input;
	const worst = worstFirst(measure, crops)[0];
	const sentence = both(input.say);
	const about = { season: release.season };
	const lead = worst && {
		...about,
		crop: worst.cropKey,
		figure: referenceText({ measure: measure.key, crop: worst.cropKey, area: worst.areaKey }),
		measure: saidOf(measure),
	};
	const blocks: Unnamed[] = [
		{ type: "heading", text: sentence("happened") },
		{ type: "text", text: lead ? sentence("lead", lead) : sentence("noLead", about) },
		...(worst ? [{ type: "crops", measure: measure.key, area: worst.areaKey } as const] : []),
		...(worst ? wherePart(input, worst.cropKey, sentence) : []),
		{ type: "heading", text: sentence("withheldTitle") },
		{ type: "text", text: sentence("withheld", { ...input.counties }) },
		{ type: "heading", text: sentence("cautions") },
		{ type: "caution", key: "local_advice" },
		{ type: "caution", key: "damaged_fruit" },
		{ type: "caution", key: "frost_protection" },
	];
	return {
		title: sentence("title", about),
		summary: lead ? sentence("lead", lead) : sentence("noLead", about),
		blocks: blocks.map((block, index) => Object.assign({ id: `b${index + 1}` }, block) as Block),
	};
}

type Unnamed = Block extends infer B ? (B extends Block ? Omit<B, "id"> : never) : never;

/** A map of the worst crop, its widest differences between districts, and the other measures of the same crop. */
function wherePart(
	{ measures, measure, districts }: DraftInput,
	crop: string,
	sentence: (key: string, values?: Record<string, string | number>) => DraftWords,
): Unnamed[] {
	const shown = worstFirst(
		measure,
		districts.map((cell) => ({ ...cell, cropKey: crop })),
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
	const rest = measures.filter(({ key }) => key !== measure.key);
	const days = rest.filter(({ kind }) => kind === "day");
	const others = rest.filter(({ kind, worse }) => kind !== "day" && worse === measure.worse).slice(0, 2);
	return [
		{ type: "heading", text: sentence("where", { measure: saidOf(measure) }) },
		{ type: "map", measure: measure.key, crop },
		...widest,
		{ type: "table", measure: measure.key, crop, kind: "district" },
		...[...others, ...days].map((other) => ({ type: "figure" as const, measure: other.key, crop, area: "network" })),
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

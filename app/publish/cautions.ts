import type { ReleaseMeasure } from "./release.ts";
import { cellCounts, type CautionKey, cautionKeys, referencesOf, type ReportContent } from "./report.ts";

type Told = Pick<ReleaseMeasure, "key" | "hue">;

/** The cautions that a report on some measures cannot go without, as what it tells can lead somebody to dangerous work. */
export function neededCautions(measures: Told[]): CautionKey[] {
	const tells = (test: (measure: Told) => boolean) => measures.some(test);
	const needed: Record<CautionKey, boolean> = {
		local_advice: true,
		damaged_fruit: tells(({ hue }) => hue === "loss" || hue === "pests"),
		pesticide: tells(({ hue }) => hue === "pests"),
		frost_protection: tells(({ key, hue }) => hue === "cold" || /freeze|frost|killed/.test(key)),
		station_air: tells(({ hue }) => hue === "cold"),
	};
	return cautionKeys.filter((key) => needed[key]);
}

/** Those of them that a report's author has not put in: its page adds them at its end. */
export function missingCautions(content: ReportContent, measures: Told[]): CautionKey[] {
	const inBlocks = content.blocks.flatMap((block) => ("measure" in block ? [block.measure] : []));
	const keys = new Set([...inBlocks, ...referencesOf(content).map(({ measure }) => measure)]);
	keys.delete(cellCounts);
	const present = new Set(content.blocks.flatMap((block) => (block.type === "caution" ? [block.key] : [])));
	return neededCautions(measures.filter(({ key }) => keys.has(key))).filter((key) => !present.has(key));
}

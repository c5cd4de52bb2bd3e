import { expect, test } from "vitest";
import { missingCautions } from "./cautions.ts";
import type { Block, ReportContent } from "./report.ts";

const words = { en: "", es: "" };
const measures = [
	{ key: "crop_loss", hue: "loss" as const },
	{ key: "freeze_loss", hue: "loss" as const },
	{ key: "scab_seen", hue: "pests" as const },
	{ key: "coldest", hue: "cold" as const },
];
const content = (text: string, ...blocks: Block[]): ReportContent => ({
	title: words,
	summary: { en: text, es: "" },
	blocks,
});

test("local advice comes first in every report", () => {
	expect(missingCautions(content(""), measures)).toEqual(["local_advice"]);
});

test("whoever tells of pests is told of labels, and whoever tells of frost of its dangers, also where a chart tells it", () => {
	const scab = { id: "a", type: "map", measure: "scab_seen", crop: "apple" } as const;
	expect(missingCautions(content("", scab), measures)).toEqual(["damaged_fruit", "pesticide", "local_advice"]);
	expect(missingCautions(content("[[freeze_loss|apple|network]]"), measures)).toEqual([
		"damaged_fruit",
		"frost_protection",
		"local_advice",
	]);
	expect(missingCautions(content("[[coldest|apple|network]]"), measures)).toContain("station_air");
});

test("a caution that stands in the report is not added again", () => {
	const cautions: Block[] = [
		{ id: "a", type: "caution", key: "local_advice" },
		{ id: "b", type: "caution", key: "damaged_fruit" },
	];
	expect(missingCautions(content("[[crop_loss|apple|network]]", ...cautions), measures)).toEqual([]);
});

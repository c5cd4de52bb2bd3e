import { z } from "zod";

const Cell = z.object({
	areaKey: z.string(),
	areaName: z.string(),
	status: z.enum(["shown", "withheld", "no_growers"]),
	look: z.enum(["number", "rough", "withheld", "no_growers", "no_figure"]),
	classIndex: z.number().int().nullable().default(null),
	value: z.number().nullable().default(null),
	lower: z.number().nullable().default(null),
	upper: z.number().nullable().default(null),
	quartiles: z.object({ first: z.number(), third: z.number() }).nullable().default(null),
	steadiness: z.enum(["steady", "care", "rough"]).nullable().default(null),
	respondentsBand: z.string().nullable().default(null),
});
/** One area of a map as it is told and drawn. */
export type DrawnCell = z.infer<typeof Cell>;

/** What the figures' address answers, checked before it is drawn. */
export const FiguresAnswer = z.object({
	classes: z.array(z.object({ from: z.number(), to: z.number(), count: z.number() })),
	cells: z.array(Cell),
	areaOfCounty: z.record(z.string(), z.string().nullable()),
});
export type FiguresAnswer = z.infer<typeof FiguresAnswer>;
export type DrawnClass = FiguresAnswer["classes"][number];

/** The outlines' answer; the geometry itself is handed on to the map library. */
export const GeometryAnswer = z.object({
	counties: z.looseObject({ type: z.literal("FeatureCollection") }),
	stateLines: z.looseObject({ type: z.literal("FeatureCollection") }),
	stateNames: z.looseObject({ type: z.literal("FeatureCollection") }),
});
export type GeometryAnswer = z.infer<typeof GeometryAnswer>;

export type Hue = "loss" | "bloom" | "pests" | "cold" | "yield";
/** A subject's palette from little to much, or `normal`: two hues that part in the middle. */
export type DrawnHue = Hue | "normal";

/** Which steps of a palette of six stand for how many classes: spread out, and never the palest, which is near to paper. */
const steps: Record<number, number[]> = { 1: [4], 2: [2, 5], 3: [2, 4, 6], 4: [2, 3, 5, 6], 5: [2, 3, 4, 5, 6] };
export function paletteStep(classIndex: number, classCount: number): number {
	return steps[classCount]?.[classIndex] ?? 4;
}

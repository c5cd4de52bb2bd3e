import { type DrawnHue, paletteStep } from "./map-data.ts";

/** Written out, since the style sheet is made from the class names that stand in the sources. */
const fills: Record<DrawnHue, string[]> = {
	loss: ["", "fill-loss-1", "fill-loss-2", "fill-loss-3", "fill-loss-4", "fill-loss-5", "fill-loss-6"],
	bloom: ["", "fill-bloom-1", "fill-bloom-2", "fill-bloom-3", "fill-bloom-4", "fill-bloom-5", "fill-bloom-6"],
	pests: ["", "fill-pests-1", "fill-pests-2", "fill-pests-3", "fill-pests-4", "fill-pests-5", "fill-pests-6"],
	cold: ["", "fill-cold-1", "fill-cold-2", "fill-cold-3", "fill-cold-4", "fill-cold-5", "fill-cold-6"],
	yield: ["", "fill-yield-1", "fill-yield-2", "fill-yield-3", "fill-yield-4", "fill-yield-5", "fill-yield-6"],
	normal: ["", "fill-normal-1", "fill-normal-2", "fill-normal-3", "fill-normal-4", "fill-normal-5", "fill-normal-6"],
};

/** The class name that fills a shape with a class's colour. */
export function fillOf(hue: DrawnHue, classIndex: number, classCount: number): string {
	return fills[hue][paletteStep(classIndex, classCount)] ?? "";
}

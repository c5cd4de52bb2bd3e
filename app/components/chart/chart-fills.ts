import type { Hue } from "#app/components/map/map-data.ts";

/** Written out, since the style sheet is made from the class names that stand in the sources. */
export const markFill: Record<Hue, string> = {
	loss: "fill-loss-4",
	bloom: "fill-bloom-4",
	pests: "fill-pests-4",
	cold: "fill-cold-4",
	yield: "fill-yield-4",
};
export const paleFill: Record<Hue, string> = {
	loss: "fill-loss-2",
	bloom: "fill-bloom-2",
	pests: "fill-pests-2",
	cold: "fill-cold-2",
	yield: "fill-yield-2",
};
const parts: Record<Hue, string[]> = {
	loss: ["fill-loss-5", "fill-loss-3", "fill-loss-6", "fill-loss-4"],
	bloom: ["fill-bloom-5", "fill-bloom-3", "fill-bloom-6", "fill-bloom-4"],
	pests: ["fill-pests-5", "fill-pests-3", "fill-pests-6", "fill-pests-4"],
	cold: ["fill-cold-5", "fill-cold-3", "fill-cold-6", "fill-cold-4"],
	yield: ["fill-yield-5", "fill-yield-3", "fill-yield-6", "fill-yield-4"],
};

/** Parts that lie side by side differ in lightness, so that grey print tells them apart. */
export const partFill = (hue: Hue, index: number) => parts[hue][index % 4] ?? "";

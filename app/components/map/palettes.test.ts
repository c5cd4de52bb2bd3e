import { readFileSync } from "node:fs";
import { expect, test } from "vitest";
import { type Hue, paletteStep } from "./map-data.ts";

type Triple = [number, number, number];
type Matrix = [Triple, Triple, Triple];

/**
 * What is left of a colour in linear RGB, at full severity. Source: Machado, Oliveira and Fernandes, A Physiologically-based
 * Model for Simulation of Color Vision Deficiency (2009); the numbers are written from memory, each row summing to 1.
 */
const seen: Record<string, Matrix> = {
	"full colour vision": [
		[1, 0, 0],
		[0, 1, 0],
		[0, 0, 1],
	],
	protanopia: [
		[0.152286, 1.052583, -0.204868],
		[0.114503, 0.786281, 0.099216],
		[-0.003882, -0.048116, 1.051998],
	],
	deuteranopia: [
		[0.367322, 0.860646, -0.227968],
		[0.280085, 0.672501, 0.047413],
		[-0.01182, 0.04294, 0.968881],
	],
	tritanopia: [
		[1.255528, -0.076749, -0.178779],
		[-0.078411, 0.930809, 0.147602],
		[0.004733, 0.691367, 0.3039],
	],
	// Relative luminance of sRGB, as a grey printer has it.
	"grey print": [
		[0.2126, 0.7152, 0.0722],
		[0.2126, 0.7152, 0.0722],
		[0.2126, 0.7152, 0.0722],
	],
};

const hues: Hue[] = ["loss", "bloom", "pests", "cold", "yield"];
const tokens = readFileSync(new URL("../../styles/tokens.css", import.meta.url), "utf8");
/** The light palettes, which print takes too, and the dark ones. */
const parts = { light: tokens.split("@media screen")[0] ?? "", dark: tokens.split("@media screen")[1] ?? "" };

function linearOf(part: string, name: string): Triple {
	const hex = new RegExp(`--color-${name}: #([0-9a-f]{6});`).exec(part)?.[1];
	if (!hex) throw new Error(`no colour ${name}`);
	return [0, 2, 4].map((at) => {
		const value = Number.parseInt(hex.slice(at, at + 2), 16) / 255;
		return value <= 0.04045 ? value / 12.92 : ((value + 0.055) / 1.055) ** 2.4;
	}) as Triple;
}

const times = (matrix: Matrix, [r, g, b]: Triple) =>
	matrix.map((row) => row[0] * r + row[1] * g + row[2] * b) as Triple;
const within = (triple: Triple) => triple.map((value) => Math.min(1, Math.max(0, value))) as Triple;

/** Linear sRGB to CIELAB under D65. */
function labOf(linear: Triple): Triple {
	const [x, y, z] = times(
		[
			[0.4124564 / 0.95047, 0.3575761 / 0.95047, 0.1804375 / 0.95047],
			[0.2126729, 0.7151522, 0.072175],
			[0.0193339 / 1.08883, 0.119192 / 1.08883, 0.9503041 / 1.08883],
		],
		linear,
	).map((value) => (value > 216 / 24389 ? Math.cbrt(value) : ((24389 / 27) * value + 16) / 116)) as Triple;
	return [116 * y - 16, 500 * (x - y), 200 * (y - z)];
}

/** Two patches apart on a map are told from each other at five times what the eye just notices side by side (2.3). */
const leastDistance = 11.5;

test.each(Object.keys(seen))("neighbouring classes of every palette are told apart with %s", (vision) => {
	const tooNear: string[] = [];
	for (const [name, part] of Object.entries(parts)) {
		for (const hue of hues) {
			const lightness: number[] = [];
			for (const count of [2, 3, 4, 5]) {
				const labs = Array.from({ length: count }, (_, index) =>
					labOf(within(times(seen[vision]!, linearOf(part, `${hue}-${paletteStep(index, count)}`)))),
				);
				if (count === 5) lightness.push(...labs.map(([l]) => l));
				for (const [index, lab] of labs.slice(1).entries()) {
					const distance = Math.hypot(...lab.map((value, axis) => value - labs[index]![axis]!));
					if (distance < leastDistance) tooNear.push(`${name} ${hue} ${index + 1} of ${count}: ${distance.toFixed(1)}`);
				}
			}
			const turned = name === "light" ? lightness.toReversed() : lightness;
			expect(turned).toEqual(turned.toSorted((a, b) => a - b));
		}
	}
	expect(tooNear).toEqual([]);
});

test("the palette around a middle parts from it on both sides, and its two far ends are never taken for each other", () => {
	const tooNear: string[] = [];
	for (const [vision, matrix] of Object.entries(seen)) {
		for (const [name, part] of Object.entries(parts)) {
			const labs = [2, 3, 4, 5, 6].map((step) => labOf(within(times(matrix, linearOf(part, `normal-${step}`)))));
			const lightness = labs.map(([l]) => (name === "light" ? l : -l));
			expect(Math.max(...lightness)).toBe(lightness[2]);
			for (const [one, lab] of labs.entries()) {
				for (const [other, far] of labs.entries()) {
					const distance = Math.hypot(...lab.map((value, axis) => value - far[axis]!));
					// Classes that lie apart in the legend need not be as far from each other as neighbours.
					const least = Math.abs(one - other) === 1 ? leastDistance : 7;
					if (one < other && distance < least)
						tooNear.push(`${vision} ${name} ${one} ${other}: ${distance.toFixed(1)}`);
				}
			}
		}
	}
	expect(tooNear).toEqual([]);
});

import type { DrawnHue } from "./map-data.ts";

export type MapColors = Record<"paper" | "ink" | "line" | "hatch" | "unasked" | "mark", string> & {
	/** Index 1 to 6; 0 is empty, so that a step is its own index. */
	palette: string[];
};

/** The page's own colours as they are now, so that the canvas follows light, dark and the reader's settings. */
export function colorsOfPage(hue: DrawnHue): MapColors {
	const style = getComputedStyle(document.documentElement);
	const read = (name: string) => style.getPropertyValue(`--color-${name}`).trim();
	return {
		paper: read("paper"),
		ink: read("ink"),
		line: read("line"),
		hatch: read("hatch"),
		unasked: read("rule"),
		mark: read("quince"),
		palette: ["", ...[1, 2, 3, 4, 5, 6].map((step) => read(`${hue}-${step}`))],
	};
}

const side = 14;

function draw(work: (context: CanvasRenderingContext2D) => void): ImageData {
	const canvas = document.createElement("canvas");
	canvas.width = side;
	canvas.height = side;
	const context = canvas.getContext("2d");
	if (!context) throw new Error("a canvas of 14 by 14 pixels cannot be drawn");
	work(context);
	return context.getImageData(0, 0, side, side);
}

/** Slanting lines that meet themselves at the tile's edges. */
export function hatchImage(color: string): ImageData {
	return draw((context) => {
		context.strokeStyle = color;
		context.lineWidth = 2.4;
		for (const shift of [-side, 0, side]) {
			context.beginPath();
			context.moveTo(shift - 2, side + 2);
			context.lineTo(shift + side + 2, -2);
			context.stroke();
		}
	});
}

export function dotImage(color: string): ImageData {
	return draw((context) => {
		context.fillStyle = color;
		context.beginPath();
		context.arc(4, 4, 2.4, 0, 2 * Math.PI);
		context.fill();
	});
}

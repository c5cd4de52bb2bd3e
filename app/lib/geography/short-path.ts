type Point = [x: number, y: number];

/**
 * Takes a drawing down, as `geoPath` draws it, as a path of whole numbers told by steps from point to point: in the country's
 * map a county has some pixels, and its outline written out is twice as long. Points that fall on the one before are left
 * out, and so are islands too small to be seen, unless nothing else is there. Two shapes with one border still share its points.
 */
export function shortPath(draw: (context: { moveTo: Draw; lineTo: Draw; closePath(): void }) => void): string {
	const lines: { points: Point[]; closed: boolean }[] = [];
	const add = (x: number, y: number) => {
		const { points } = lines.at(-1)!;
		const [lastX, lastY] = points.at(-1) ?? [];
		const [nextX, nextY] = [Math.round(x), Math.round(y)];
		if (nextX !== lastX || nextY !== lastY) points.push([nextX, nextY]);
	};
	draw({
		moveTo(x, y) {
			lines.push({ points: [], closed: false });
			add(x, y);
		},
		lineTo: add,
		closePath: () => void (lines.at(-1)!.closed = true),
	});
	const seen = lines.filter(({ points, closed }) => points.length > (closed ? 2 : 1));
	return (seen.length > 0 ? seen : lines.slice(0, 1)).map(written).join("");
}
type Draw = (x: number, y: number) => void;

function written({ points, closed }: { points: Point[]; closed: boolean }): string {
	const [start = [0, 0], ...rest] = points;
	let [lastX, lastY] = start;
	const steps = rest.map(([x, y]) => {
		const step = `${x - lastX},${y - lastY}`;
		[lastX, lastY] = [x, y];
		return step;
	});
	return `M${start.join()}${steps.length > 0 ? `l${steps.join(" ")}` : ""}${closed ? "z" : ""}`;
}

/** The points of each line of such a path. */
export function pointsOfPath(path: string): Point[][] {
	return path
		.split("M")
		.filter(Boolean)
		.map((line) => {
			const [start = "", steps = ""] = line.replace("z", "").split("l");
			let [x = 0, y = 0] = start.split(",").map(Number);
			const points: Point[] = [[x, y]];
			for (const step of steps.split(" ").filter(Boolean)) {
				const [stepX = 0, stepY = 0] = step.split(",").map(Number);
				[x, y] = [x + stepX, y + stepY];
				points.push([x, y]);
			}
			return points;
		});
}

type Point = readonly [x: number, y: number];
export type Edge = readonly [Point, Point];

/**
 * The outer border of neighbouring shapes: an edge that two of them share lies inside and falls away. Works because
 * neighbours are made of the same points, to the last digit.
 */
export function outerEdge(rings: Point[][]): Edge[] {
	const edges = new Map<string, Edge>();
	for (const ring of rings) {
		for (const [index, from] of ring.entries()) {
			const to = ring[(index + 1) % ring.length] ?? from;
			if (from[0] === to[0] && from[1] === to[1]) continue;
			const key = keyOf(from, to);
			if (!edges.delete(key)) edges.set(key, [from, to]);
		}
	}
	return [...edges.values()];
}

function keyOf(from: Point, to: Point): string {
	const [a, b] = [from.join(), to.join()];
	return a < b ? `${a} ${b}` : `${b} ${a}`;
}

export const pathOfEdges = (edges: Edge[]): string =>
	edges.map(([from, to]) => `M${from.join()}L${to.join()}`).join("");

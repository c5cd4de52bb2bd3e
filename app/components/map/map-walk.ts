import type { Place } from "./map-places.ts";

export type Direction = "up" | "down" | "left" | "right";
/** Goes one step from a place; from nowhere the walk begins in the middle of the map, and at its edge it stays. */
export type Walk = (from: string | null, direction: Direction) => string | null;
type Steps = Record<Direction, string | null>;

const ways = { up: [0, 1], down: [0, -1], left: [-1, 0], right: [1, 0] } as const;
const directions = Object.keys(ways) as Direction[];

/**
 * How arrow keys walk over a map: each leads to the nearest place in its direction, what lies aside counting double. A place
 * that is nobody's nearest, as happens to one that lies aslant of all its neighbors, is put on the way to the next: the keys
 * lead to every place.
 */
export function walkOver(places: readonly Place[]): Walk {
	const start = middleOf(places)?.key ?? null;
	const near = neighborhood(places);
	const steps = new Map(places.map((place) => [place.key, stepsFrom(place, near)]));
	const byKey = new Map(places.map((place) => [place.key, place]));
	const reached = new Set<string>();
	reach(start, steps, reached);
	for (const place of places) {
		if (reached.has(place.key)) continue;
		const before = nearestOf(near, place, ({ key }) => reached.has(key));
		if (!before) continue;
		const direction = directionTo(byKey.get(before.key)!, place);
		const from = steps.get(before.key)!;
		steps.get(place.key)![direction] = from[direction];
		from[direction] = place.key;
		reach(place.key, steps, reached);
	}
	return (from, direction) => {
		const here = from === null ? undefined : steps.get(from);
		return here ? (here[direction] ?? from) : start;
	};
}

/** Marks what can be walked to from a place. */
function reach(from: string | null, steps: ReadonlyMap<string, Steps>, reached: Set<string>): void {
	const open = [from];
	while (open.length > 0) {
		const here = open.pop();
		if (!here || reached.has(here)) continue;
		reached.add(here);
		open.push(...Object.values(steps.get(here)!));
	}
}

function stepsFrom(here: Place, near: Neighborhood): Steps {
	const best = { up: null, down: null, left: null, right: null } as Steps;
	for (const direction of directions) {
		best[direction] = nearestOf(near, here, (place) => costOf(here, place, direction))?.key ?? null;
	}
	return best;
}

/** Infinite for what does not lie in the direction; never less than how far away a place is. */
function costOf(here: Place, place: Place, direction: Direction): number {
	const [wayX, wayY] = ways[direction];
	const [x, y] = [place.x - here.x, place.y - here.y];
	const ahead = x * wayX + y * wayY;
	const aside = Math.abs(x * wayY) + Math.abs(y * wayX);
	return ahead <= 1e-6 || aside > 1.5 * ahead ? Infinity : ahead + 2 * aside;
}

const distance = (a: Place, b: Place) => Math.hypot(a.x - b.x, a.y - b.y);

function directionTo(from: Place, to: Place): Direction {
	const [x, y] = [to.x - from.x, to.y - from.y];
	if (Math.abs(x) > Math.abs(y)) return x > 0 ? "right" : "left";
	return y > 0 ? "up" : "down";
}

type Neighborhood = { within: (here: Place, out: number) => Place[]; span: number };

/** Places by squares of a degree, so that nobody looks through all thousands of them for one nearby. */
function neighborhood(places: readonly Place[]): Neighborhood {
	const squares = new Map<string, Place[]>();
	for (const place of places) {
		const square = `${Math.floor(place.x)} ${Math.floor(place.y)}`;
		squares.set(square, [...(squares.get(square) ?? []), place]);
	}
	const span = Math.max(...["x", "y"].map((axis) => spanOf(places.map((place) => place[axis as "x" | "y"]))));
	const within = ({ x, y }: Place, out: number) => {
		if (out > 8) return [...places];
		const found: Place[] = [];
		for (let column = Math.floor(x - out); column <= x + out; column += 1) {
			for (let row = Math.floor(y - out); row <= y + out; row += 1) {
				found.push(...(squares.get(`${column} ${row}`) ?? []));
			}
		}
		return found;
	};
	return { within, span };
}

const spanOf = (values: number[]) =>
	values.reduce((most, value) => Math.max(most, value), 0) - values.reduce((least, value) => Math.min(least, value), 0);

/** The place of least cost, or nearest among those that fit; looked for ever farther out until nothing there can beat it. */
function nearestOf(
	{ within, span }: Neighborhood,
	here: Place,
	judge: (place: Place) => number | boolean,
): Place | undefined {
	for (let out = 1; ; out *= 2) {
		let best: { place: Place; cost: number } | undefined;
		for (const place of within(here, out)) {
			const judged = place !== here && judge(place);
			const cost = judged === true ? distance(here, place) : judged === false ? Infinity : judged;
			if (cost < (best?.cost ?? Infinity)) best = { place, cost };
		}
		if ((best && best.cost <= out) || out > 3 * span + 1) return best?.place;
	}
}

function middleOf(places: readonly Place[]): Place | undefined {
	const mean = (axis: "x" | "y") => places.reduce((sum, place) => sum + place[axis], 0) / places.length;
	const middle = { key: "", x: mean("x"), y: mean("y") };
	return places.toSorted((a, b) => distance(a, middle) - distance(b, middle))[0];
}

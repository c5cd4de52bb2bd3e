import { expect, test } from "vitest";
import { linkViews, type MapView, type Viewer } from "./view-link.ts";

function fakeMap() {
	let tell: ((view: MapView) => void) | undefined;
	const followed: MapView[] = [];
	const viewer: Viewer = {
		onMoved: (told) => {
			tell = told;
			return () => {
				tell = undefined;
			};
		},
		follow: (view) => void followed.push(view),
	};
	return { viewer, followed, move: (view: MapView) => tell?.(view) };
}
const iowa: MapView = { longitude: -93.5, latitude: 42, zoom: 6 };

test("a map that is moved takes the others with it and is not told of its own move", () => {
	const link = linkViews();
	const [one, two] = [fakeMap(), fakeMap()];
	link.join(one.viewer);
	link.join(two.viewer);
	one.move(iowa);
	expect([one.followed, two.followed]).toEqual([[], [iowa]]);
});

test("a map that comes late goes where the others are, and one that has left stays where it was", () => {
	const link = linkViews();
	const [one, two, three] = [fakeMap(), fakeMap(), fakeMap()];
	link.join(one.viewer);
	const leave = link.join(two.viewer);
	one.move(iowa);
	link.join(three.viewer);
	expect(three.followed).toEqual([iowa]);
	leave();
	three.move({ ...iowa, zoom: 7 });
	expect(two.followed).toHaveLength(1);
	expect(one.followed).toEqual([{ ...iowa, zoom: 7 }]);
	two.move(iowa);
	expect(one.followed).toHaveLength(1);
});

import { type Browser, chromium, type Page } from "playwright-core";
import { median } from "simple-statistics";
import { listCounties } from "#app/lib/geography/counties.ts";
import { usTopology } from "#app/lib/geography/topology.server.ts";
import { desktop, measuringSettings } from "#tests/helpers/browser.ts";
import { startStack } from "#tests/helpers/stack.ts";
import { addLargeRelease } from "./large-release.ts";
import type { Bench } from "./line.ts";
import { medians, timed } from "./timing.ts";

/** From the figures' arrival to their colours, and how many frames a second are drawn while the map is dragged. */
type Look = { paintMs: number; frames: number };

/** States and territories that lie apart: with them the others would be drawn small. */
const apart = new Set(["02", "15", "60", "66", "69", "72", "78"]);

/** The map with every county of the contiguous states: its page, and the live map in Chromium without a graphics card. */
export async function map({ print, runs }: Bench): Promise<void> {
	await using stack = await startStack();
	const counties = listCounties(usTopology()).filter(({ stateFips }) => !apart.has(stateFips));
	const { number } = await addLargeRelease(stack.database.ownerUrl, counties);
	const address = `${stack.baseUrl}/map?release=${number}&measure=measure_1&crop=apple`;
	const name = `map of ${counties.length.toLocaleString("en")} counties`;

	// The floor is a page of words, through the same server.
	const { page, floor } = await medians(runs, {
		page: () => timed(() => read(address)),
		floor: () => timed(() => read(`${stack.baseUrl}/accessibility`)),
	});
	print({ name: `${name}: its page`, value: page.clock, unit: "ms", floor: floor.clock, goal: "under 700" });

	const { figures, outlines } = await looksAt(address, Math.min(runs, 5));
	const [paint, frames] = (["paintMs", "frames"] as const).map((key) => ({
		value: median(figures.map((look) => look[key])),
		floor: median(outlines.map((look) => look[key])),
	}));
	print(
		{ name: `${name}: figures to colors`, ...paint!, unit: "ms", goal: "at most 2 floors" },
		{ name: `${name}: dragged`, ...frames!, unit: "frames a second", goal: "at least half the floor" },
	);
}

async function read(address: string): Promise<void> {
	const answer = await fetch(address);
	await answer.arrayBuffer();
	if (answer.status !== 200) throw new Error(`${address} answered ${answer.status}`);
}

/**
 * The floor is the same map whose figures tell of no county: what outlines alone take on this machine at this moment. Both
 * take turns, so that whoever else uses the machine slows both alike; the first turn warms up.
 */
async function looksAt(address: string, runs: number): Promise<Record<"figures" | "outlines", Look[]>> {
	const looks: Record<"figures" | "outlines", Look[]> = { figures: [], outlines: [] };
	const browser = await chromium.launch(measuringSettings);
	try {
		for (let run = 0; run <= runs; run++) {
			for (const kind of ["outlines", "figures"] as const) {
				const look = await lookAt(browser, address, kind === "outlines");
				if (run > 0) looks[kind].push(look);
			}
		}
		return looks;
	} finally {
		await browser.close();
	}
}

/** Opens the map, lets it draw its outlines before it gets its figures, and then drags it about. */
async function lookAt(browser: Browser, address: string, empty: boolean): Promise<Look> {
	const page = await browser.newPage(desktop);
	page.setDefaultTimeout(180_000);
	await page.route("**/map/figures/**", async (route) => {
		const answer = await route.fetch();
		const figures = (await answer.json()) as object;
		await page.waitForSelector(".maplibregl-canvas", { state: "attached" });
		// The outlines are cut into tiles by workers: what comes after they are done is the figures' own.
		await page.waitForTimeout(4_000);
		await route.fulfill({ response: answer, json: empty ? { ...figures, cells: [], classes: [] } : figures });
	});
	// What tsx puts around functions that have names, so that those below also run in the page.
	await page.addInitScript("globalThis.__name = (named) => named");
	await page.addInitScript(noteWhenReady);
	await page.goto(address, { waitUntil: "domcontentloaded" });
	const look = { paintMs: await paintTime(page), frames: await page.evaluate(framesInMoving, 3_000) };
	await page.close();
	return look;
}

/** Milliseconds from the last byte of the figures to the map that shows them. */
async function paintTime(page: Page): Promise<number> {
	await page.waitForFunction(() => "mapReadyAt" in window);
	return page.evaluate(() => {
		const figures = performance.getEntriesByType("resource").find(({ name }) => name.includes("/map/figures/"));
		const { mapReadyAt } = window as unknown as { mapReadyAt: number };
		return mapReadyAt - (figures as PerformanceResourceTiming).responseEnd;
	});
}

/** In the page: notes the moment at which the live map takes the drawn one's place. */
function noteWhenReady() {
	const look = () => {
		if (document.querySelector(".map-live:not(.invisible)")) Object.assign(window, { mapReadyAt: performance.now() });
		else requestAnimationFrame(look);
	};
	requestAnimationFrame(look);
}

/** In the page: drags the map in circles for a while, a step each frame. @returns frames a second. */
async function framesInMoving(forMs: number): Promise<number> {
	const canvas = document.querySelector(".maplibregl-canvas")!;
	const { left, top, width, height } = canvas.getBoundingClientRect();
	const at = (angle: number) => ({
		clientX: left + width / 2 + 60 * Math.cos(angle),
		clientY: top + height / 2 + 60 * Math.sin(angle),
		button: 0,
		buttons: 1,
		bubbles: true,
		cancelable: true,
	});
	canvas.dispatchEvent(new MouseEvent("mousedown", at(0)));
	const began = performance.now();
	let frames = 0;
	while (performance.now() - began < forMs) {
		await new Promise((resolve) => requestAnimationFrame(resolve));
		frames += 1;
		canvas.dispatchEvent(new MouseEvent("mousemove", at(frames / 12)));
	}
	const seconds = (performance.now() - began) / 1000;
	canvas.dispatchEvent(new MouseEvent("mouseup", at(0)));
	return frames / seconds;
}

import { type RefObject, useEffect, useRef, useState } from "react";
import { useTranslation } from "react-i18next";
import type { LiveMap } from "./live-map.client.ts";
import { FiguresAnswer, GeometryAnswer, type DrawnHue } from "./map-data.ts";

export type LiveMapState = "drawing" | "ready" | "no_figures" | "no_map";
type Handlers = {
	onPoint: (fips: string | null, at: { x: number; y: number } | null) => void;
	onChoose: (fips: string) => void;
};
type Wanted = { countiesAddress: string; figuresAddress: string; hue: DrawnHue };

/**
 * Brings the live map up behind the drawn one. "no_map": no WebGL, or the outlines or the library did not come; the drawn
 * map stays. "no_figures": the figures did not come and can be asked for again.
 */
export function useLiveMap(container: RefObject<HTMLElement | null>, wanted: Wanted, handlers: Handlers) {
	const [live, setLive] = useState<LiveMap | null>(null);
	const [shown, setShown] = useState<{ address: string; figures: FiguresAnswer } | null>(null);
	const [noMap, setNoMap] = useState(false);
	const [missed, setMissed] = useState<{ address: string; attempt: number } | null>(null);
	const [attempt, setAttempt] = useState(0);
	const words = useMapWords();
	const latest = useRef({ handlers, words });
	useEffect(() => {
		latest.current = { handlers, words };
	});

	useEffect(() => {
		const element = container.current;
		if (!element) return;
		let gone = false;
		let made: LiveMap | undefined;
		const options = {
			container: element,
			words: latest.current.words,
			onPoint: (...point: Parameters<Handlers["onPoint"]>) => latest.current.handlers.onPoint(...point),
			onChoose: (fips: string) => latest.current.handlers.onChoose(fips),
		};
		bringUp(wanted.countiesAddress, options, () => gone)
			.then((map) => {
				made = map;
				if (map) setLive(map);
			})
			.catch(() => gone || setNoMap(true));
		return () => {
			gone = true;
			setLive(null);
			made?.remove();
		};
	}, [container, wanted.countiesAddress]);

	useEffect(() => {
		const stop = new AbortController();
		fetchJson(wanted.figuresAddress, { signal: stop.signal, cache: attempt > 0 ? "reload" : "default" })
			.then((answer) => setShown({ address: wanted.figuresAddress, figures: FiguresAnswer.parse(answer) }))
			.catch(() => stop.signal.aborted || setMissed({ address: wanted.figuresAddress, attempt }));
		return () => stop.abort();
	}, [wanted.figuresAddress, attempt]);

	const current = shown?.address === wanted.figuresAddress ? shown.figures : null;
	const [painted, setPainted] = useState<LiveMap | null>(null);
	useEffect(() => {
		if (!live || !current) return;
		let gone = false;
		void live.show(current, wanted.hue).then(() => gone || setPainted(live));
		return () => {
			gone = true;
		};
	}, [live, current, wanted.hue]);

	const noFigures = !current && missed?.address === wanted.figuresAddress && missed.attempt === attempt;
	const state: LiveMapState = noMap
		? "no_map"
		: noFigures
			? "no_figures"
			: live && current && painted === live
				? "ready"
				: "drawing";
	return { state, live, figures: current, retry: () => setAttempt((before) => before + 1) };
}

type BringUp = Omit<Parameters<typeof import("./live-map.client.ts").createLiveMap>[0], "geometry">;

async function bringUp(countiesAddress: string, options: BringUp, isGone: () => boolean): Promise<LiveMap | undefined> {
	const [{ createLiveMap }, geometry] = await Promise.all([import("./live-map.client.ts"), fetchJson(countiesAddress)]);
	if (isGone()) return undefined;
	const map = await createLiveMap({ ...options, geometry: GeometryAnswer.parse(geometry) });
	if (!isGone()) return map;
	map.remove();
	return undefined;
}

export async function fetchJson(address: string, how?: RequestInit): Promise<unknown> {
	const response = await fetch(address, how);
	if (!response.ok) throw new Error(`${address} answered ${response.status}`);
	return response.json();
}

/** The sentences that the map library says itself. */
export function useMapWords(): Record<string, string> {
	const { t } = useTranslation("public");
	return {
		"Map.Title": t("map.live.title"),
		"CooperativeGesturesHandler.WindowsHelpText": t("map.live.wheel"),
		"CooperativeGesturesHandler.MacHelpText": t("map.live.wheelMac"),
		"CooperativeGesturesHandler.MobileHelpText": t("map.live.fingers"),
	};
}

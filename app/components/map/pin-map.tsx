import "./map.css";
import { type KeyboardEvent, useEffect, useId, useRef, useState } from "react";
import { classes } from "#app/components/classes.ts";
import type { Pin } from "#app/lib/geography/pin.ts";
import { GeometryAnswer } from "./map-data.ts";
import { mapKey, ZoomButtons } from "./map-keys.tsx";
import type { PinMap as LivePinMap } from "./pin-map.client.ts";
import { fetchJson, useMapWords } from "./use-live-map.ts";

type PinMapProps = {
	countiesAddress: string;
	label: string;
	/** How keys and fingers work the map. */
	hint: string;
	pin: Pin | null;
	onPin: (pin: Pin) => void;
	/** The county of the pin as the map sees it, told below: the server finds it again. */
	told: (countyFips: string | null) => string;
};

/** A small map on which a pin is put by finger, pointer or arrow keys. Where it cannot run there is none: it only fills boxes. */
export function PinMap({ countiesAddress, label, hint, pin, onPin, told }: PinMapProps) {
	const hintId = useId();
	const container = useRef<HTMLDivElement>(null);
	const { live, state } = usePinMap(container, countiesAddress, onPin);
	useEffect(() => live?.show(pin), [live, pin]);
	if (state === "no_map") return null;
	const ready = state === "ready";
	const onKeyDown = (event: KeyboardEvent) => {
		if (!live || event.ctrlKey || event.metaKey || event.altKey) return;
		const key = mapKey(event.key);
		if (!key || key === "leave") return;
		event.preventDefault();
		if (key === "in" || key === "out") live.zoom(key === "in" ? 1 : -1);
		else live.step(key, event.shiftKey ? 2 : 12);
	};
	return (
		<div className="no-print mb-6">
			<div className="relative h-80 border border-line bg-paper">
				{/* A map worked by arrow keys is what the role "application" is for; the boxes below do the same. */}
				{/* oxlint-disable-next-line jsx-a11y/no-noninteractive-element-interactions */}
				<div
					className={classes("map-live absolute inset-0", !ready && "invisible")}
					role="application"
					aria-label={label}
					aria-describedby={hintId}
					// oxlint-disable-next-line jsx-a11y/no-noninteractive-tabindex -- its arrow keys work while it is in focus
					tabIndex={ready ? 0 : -1}
					onKeyDown={onKeyDown}
				>
					<div ref={container} className="size-full" />
				</div>
				{ready && <ZoomButtons onZoom={(steps) => live?.zoom(steps)} onReset={() => live?.reset()} />}
			</div>
			<p id={hintId} className={classes("mt-2 text-base text-quiet", !ready && "hidden")}>
				{hint}
			</p>
			<output className="mt-2 block min-h-12 border-l-4 border-quince bg-sheet px-4 py-2.5 font-bold">
				{live && pin ? told(live.countyOf(pin)) : null}
			</output>
		</div>
	);
}

function usePinMap(container: { current: HTMLElement | null }, countiesAddress: string, onPin: (pin: Pin) => void) {
	const [live, setLive] = useState<LivePinMap | null>(null);
	const [noMap, setNoMap] = useState(false);
	const words = useMapWords();
	const latest = useRef({ onPin, words });
	useEffect(() => {
		latest.current = { onPin, words };
	});
	useEffect(() => {
		const element = container.current;
		if (!element) return;
		let gone = false;
		let made: LivePinMap | undefined;
		const bringUp = async () => {
			const [{ createPinMap }, answer] = await Promise.all([
				import("./pin-map.client.ts"),
				fetchJson(countiesAddress).then((json) => GeometryAnswer.parse(json)),
			]);
			if (gone) return;
			made = await createPinMap({
				container: element,
				geometry: answer,
				words: latest.current.words,
				onPin: (pin) => latest.current.onPin(pin),
			});
			if (gone) made.remove();
			else setLive(made);
		};
		bringUp().catch(() => gone || setNoMap(true));
		return () => {
			gone = true;
			setLive(null);
			made?.remove();
		};
	}, [container, countiesAddress]);
	return { live, state: noMap ? "no_map" : live ? "ready" : "drawing" } as const;
}

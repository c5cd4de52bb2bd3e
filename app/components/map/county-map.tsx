import { type KeyboardEvent, useEffect, useId, useMemo, useRef, useState } from "react";
import { useTranslation } from "react-i18next";
import { Button } from "#app/components/button.tsx";
import { classes } from "#app/components/classes.ts";
import type { FigureShape } from "#app/lib/format.ts";
import { useCellWords } from "./cell-words.ts";
import type { LiveMap } from "./live-map.client.ts";
import { mapKey, ZoomButtons } from "./map-keys.tsx";
import { StaticMap, type StaticMapProps } from "./static-map.tsx";
import { useLiveMap } from "./use-live-map.ts";
import type { ViewLink } from "./view-link.ts";

type CountyMapProps = Omit<StaticMapProps, "selected" | "sentences"> & {
	countiesAddress: string;
	figuresAddress: string;
	measure: FigureShape;
	/** The area chosen on this page, by key. */
	chosen: string | null;
	/** The area that the reader points at elsewhere on the page, as in the table. */
	pointed: string | null;
	nameOf: (areaKey: string) => string;
	onChoose: (areaKey: string | null) => void;
	/** The area under the pointer, for another map that marks it too. */
	onPoint?: (areaKey: string | null) => void;
	/** The state that the map is zoomed to. */
	focus?: string | null;
	/** What holds this map and another on the same view. */
	link?: ViewLink;
};

/** The map of a page: drawn by the server at first, live once it can be; by pointer, finger and keyboard. */
export function CountyMap(props: CountyMapProps) {
	const { countiesAddress, figuresAddress, measure, chosen, pointed, nameOf, onChoose, onPoint, link, ...rest } = props;
	const { focus = null, ...drawn } = rest;
	const { t } = useTranslation("public");
	const words = useCellWords(measure);
	const hintId = useId();
	const container = useRef<HTMLDivElement>(null);
	const [hover, setHover] = useState<{ areaKey: string; x: number; y: number } | null>(null);
	/** Where the arrow keys stand; a fast walker presses the next key before the page has drawn the last. */
	const walked = useRef<{ areaKey: string | null; drawn: string | null } | null>(null);
	const areaOf = (fips: string | null) => (fips && drawn.areaOfCounty[fips]) || null;
	const { state, live, retry } = useLiveMap(
		container,
		{ countiesAddress, figuresAddress, hue: drawn.hue },
		{
			onPoint: (fips, at) => {
				const areaKey = areaOf(fips);
				setHover(areaKey && at ? { areaKey, ...at } : null);
				onPoint?.(areaKey);
			},
			onChoose: (fips) => onChoose(areaOf(fips)),
		},
	);
	useEffect(() => (live && link ? link.join(live) : undefined), [live, link]);
	useFraming(live, focus);
	const marked = hover?.areaKey ?? pointed ?? chosen;
	useEffect(() => {
		if (state === "ready") live?.mark(marked);
	}, [live, state, marked]);

	const { cells } = drawn;
	const sentences = useMemo(
		() => Object.fromEntries(cells.map((cell) => [cell.areaKey, words(nameOf(cell.areaKey), cell)])),
		// The words change with the figures and with nothing else on this page.
		// oxlint-disable-next-line react-hooks/exhaustive-deps
		[cells],
	);
	const sentence = (areaKey: string) => sentences[areaKey] ?? words(nameOf(areaKey), undefined);
	const onKeyDown = (event: KeyboardEvent) => {
		const step = mapKey(event.key);
		if (!step || !live || event.ctrlKey || event.metaKey || event.altKey) return;
		event.preventDefault();
		if (step === "leave") {
			setHover(null);
			onChoose(null);
		} else if (step === "in" || step === "out") live.zoom(step === "in" ? 1 : -1);
		else {
			const { current } = walked;
			const going = current && (current.areaKey === chosen || current.drawn === chosen);
			const areaKey = live.next(going ? current.areaKey : chosen, step);
			walked.current = { areaKey, drawn: chosen };
			onChoose(areaKey);
		}
	};
	const ready = state === "ready";
	return (
		<div>
			<div className="relative h-[min(80vh,44rem)] border border-line bg-paper print:h-auto print:border-0">
				<div
					className={classes("map-static h-full", ready && "invisible print:visible")}
					aria-hidden={ready || undefined}
				>
					<StaticMap {...drawn} sentences={sentences} selected={ready ? chosen : marked} framed />
				</div>
				{/* A map walked by arrow keys is what the role "application" is for; every figure is in the table too. */}
				{/* oxlint-disable-next-line jsx-a11y/no-noninteractive-element-interactions */}
				<div
					className={classes("map-live no-print absolute inset-0", !ready && "invisible")}
					role="application"
					aria-label={drawn.label}
					aria-roledescription={t("map.live.role")}
					aria-describedby={hintId}
					// oxlint-disable-next-line jsx-a11y/no-noninteractive-tabindex -- its arrow keys work while it is in focus
					tabIndex={ready ? 0 : -1}
					onKeyDown={onKeyDown}
				>
					<div ref={container} className="size-full" />
				</div>
				{ready && hover && <Tooltip x={hover.x} y={hover.y} words={sentence(hover.areaKey)} />}
				{ready && <ZoomButtons onZoom={(steps) => live?.zoom(steps)} onReset={() => live?.reset()} />}
			</div>
			<p id={hintId} className={classes("no-print mt-2 text-sm text-quiet", !ready && "hidden")}>
				{t("map.live.hint")}
			</p>
			<output
				className={classes(
					"mt-2 block min-h-12 border-l-4 border-quince bg-sheet px-4 py-2.5 font-bold",
					!chosen && "no-print",
				)}
			>
				{chosen ? sentence(chosen) : t("map.said.nothing")}
			</output>
			<Trouble state={state} onRetry={retry} />
		</div>
	);
}

/** Zooms to a state as soon as the map is there, and back to all of them; a map that was never zoomed stays where it is. */
function useFraming(live: LiveMap | null, focus: string | null) {
	const framed = useRef<string | null>(null);
	useEffect(() => {
		if (!live || (focus === null && framed.current === null)) return;
		live.frame(focus);
		framed.current = focus;
	}, [live, focus]);
}

/** Beside the pointer and never under it. The same words stand in the table, so a screen reader need not hear them twice. */
function Tooltip({ x, y, words }: { x: number; y: number; words: string }) {
	const box = useRef<HTMLDivElement>(null);
	useEffect(() => {
		const element = box.current;
		const frame = element?.parentElement;
		if (!element || !frame) return;
		const left = x + 16 + element.offsetWidth > frame.clientWidth ? Math.max(0, x - 16 - element.offsetWidth) : x + 16;
		const top = Math.max(0, Math.min(y + 12, frame.clientHeight - element.offsetHeight));
		element.style.transform = `translate(${left}px, ${top}px)`;
	}, [x, y]);
	return (
		<div
			ref={box}
			aria-hidden="true"
			className="no-print pointer-events-none absolute left-0 top-0 w-max max-w-64 border border-line bg-paper px-3 py-2 text-sm shadow-[3px_3px_0_var(--color-rule)]"
		>
			{words}
		</div>
	);
}

function Trouble({ state, onRetry }: { state: string; onRetry: () => void }) {
	const { t } = useTranslation("public");
	if (state !== "no_figures" && state !== "no_map") return null;
	return (
		<div
			role="alert"
			className="no-print mt-3 flex flex-wrap items-center gap-4 border-l-4 border-quince bg-quince-wash p-4"
		>
			<p className="max-w-prose">{t(state === "no_figures" ? "map.live.noFigures" : "map.live.noMap")}</p>
			{state === "no_figures" && (
				<Button type="button" kind="secondary" onClick={onRetry}>
					{t("map.live.retry")}
				</Button>
			)}
		</div>
	);
}

import { useTranslation } from "react-i18next";
import { Button } from "#app/components/button.tsx";
import type { Direction } from "./map-walk.ts";

const arrows: Record<string, Direction> = { ArrowUp: "up", ArrowDown: "down", ArrowLeft: "left", ArrowRight: "right" };

/** What a key does on a map in focus; undefined for one that does nothing there. */
export function mapKey(key: string): Direction | "in" | "out" | "leave" | undefined {
	if (key === "Escape") return "leave";
	if (key === "+" || key === "=") return "in";
	if (key === "-") return "out";
	return arrows[key];
}

export function ZoomButtons({ onZoom, onReset }: { onZoom: (steps: number) => void; onReset: () => void }) {
	const { t } = useTranslation("public");
	return (
		<div className="no-print absolute right-3 top-3 grid gap-2">
			<Button type="button" kind="secondary" aria-label={t("map.live.zoomIn")} onClick={() => onZoom(1)}>
				+
			</Button>
			<Button type="button" kind="secondary" aria-label={t("map.live.zoomOut")} onClick={() => onZoom(-1)}>
				−
			</Button>
			<Button type="button" kind="secondary" aria-label={t("map.live.reset")} onClick={onReset}>
				⤢
			</Button>
		</div>
	);
}

import type { DrawnPicture } from "#app/components/map/static-map.tsx";
import type { DrawnCell, DrawnClass, Hue } from "#app/components/map/map-data.ts";
import type { Passage } from "#app/publish/markdown.ts";
import type { ResolvedChart } from "#app/publish/resolved-chart.server.ts";
import type { FigureShape } from "#app/lib/format.ts";

type Words = { en: string; es: string };
export type ToldMeasure = FigureShape & { label: Words; hue: Hue };
export type ToldCell = Omit<DrawnCell, "look" | "classIndex"> & { kind: string; stateFips: string | null };
export type ToldCropCell = ToldCell & { cropKey: string };
export type ToldFigure =
	| { measure: ToldMeasure; cell: ToldCropCell; earlier?: { of: "last" | "mean"; seasons: number[] } }
	| { count: number }
	| null;
export type ToldPassage = Passage<ToldFigure>;
export type ToldPart = { kind: "text"; text: string } | { kind: "figure"; figure: ToldFigure };
export type ToldWords = { en: ToldPart[]; es: ToldPart[] };

export type ToldBlock =
	| { id: string; type: "heading"; text: ToldWords }
	| { id: string; type: "text"; text: { en: ToldPassage[]; es: ToldPassage[] } }
	| { id: string; type: "figure"; figure: ToldFigure }
	| {
			id: string;
			type: "map";
			measure: ToldMeasure;
			cropKey: string;
			cells: DrawnCell[];
			classes: DrawnClass[];
			areaOfCounty: Record<string, string | null>;
	  }
	| { id: string; type: "table"; measure: ToldMeasure; cropKey: string; kind: string; cells: ToldCell[] }
	| { id: string; type: "crops"; measure: ToldMeasure; areaName: string; cells: ToldCropCell[] }
	| { id: string; type: "chart"; drawn: ResolvedChart }
	| { id: string; type: "caution"; key: string }
	| { id: string; type: "photo"; photo: string; alt: Words; size: { widthPx: number; heightPx: number } | null }
	| { id: string; type: "photo_gone"; takenAway: { at: string; because: string } }
	| { id: string; type: "missing" };

/** A report with its figures looked up, as it is shown. */
export type ToldReport = {
	title: ToldWords;
	summary: ToldWords;
	blocks: ToldBlock[];
	season: number;
	picture: DrawnPicture | null;
};

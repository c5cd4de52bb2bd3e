import { z } from "zod";
import type { Trx } from "#app/auth/scope.server.ts";
import type { DraftFigure, ReleaseMethod } from "./draft.ts";
import { type Draft, listDraftCells } from "./drafts.server.ts";
import { countStatuses, reasonGroup, type ReasonGroup, type StatusCount } from "./statuses.ts";

/** Which part of a draft is listed, from the page's address. */
export const DraftChoice = z.object({
	crop: z.string().catch("all"),
	kind: z.enum(["county", "district", "state", "region"]).catch("district"),
});
export type DraftChoice = z.infer<typeof DraftChoice>;

export type DraftRow = {
	areaKey: string;
	name: string;
	parent: string;
	status: "shown" | "withheld" | "no_growers";
	reason: ReasonGroup | null;
	respondents: number | null;
	figures: DraftFigure[];
};
export type DraftView = {
	draft: Omit<Draft, "method"> & {
		method: Pick<
			ReleaseMethod,
			"all" | "states" | "joins" | "setAside" | "closedAt" | "weighting" | "calibrations"
		> | null;
	};
	measures: ReleaseMethod["measures"];
	cropKeys: string[];
	counts: StatusCount[];
	rows: DraftRow[];
	choice: DraftChoice;
};

/** What a reviewer sees of a draft: how much is withheld and why, and the figures that would be shown. */
export async function viewDraft(trx: Trx, draft: Draft, choice: DraftChoice): Promise<DraftView> {
	const { method } = draft;
	if (!method) return { draft: { ...draft, method: null }, measures: [], cropKeys: [], counts: [], rows: [], choice };
	const cells = await listDraftCells(trx, draft.releaseDraftId);
	const cellOf = new Map(cells.filter((cell) => cell.cropKey === choice.crop).map((cell) => [cell.areaKey, cell]));
	const nameOf = new Map(method.areas.map((area) => [area.areaKey, area.name]));
	const rows = method.areas
		.filter((area) => area.kind === choice.kind)
		.flatMap((area): DraftRow[] => {
			const cell = cellOf.get(area.areaKey);
			if (!cell || cell.status === "no_growers") return [];
			return [
				{
					areaKey: area.areaKey,
					name: area.name,
					parent: nameOf.get(area.parentKey ?? "") ?? "",
					status: cell.status,
					reason: reasonGroup(cell),
					respondents: cell.respondents,
					figures: cell.figures ?? [],
				},
			];
		});
	const { all, states, joins, setAside, closedAt, weighting, calibrations } = method;
	return {
		draft: { ...draft, method: { all, states, joins, setAside, closedAt, weighting, calibrations } },
		measures: method.measures.filter(({ acrossCrops, crops }) =>
			choice.crop === "all" ? acrossCrops : (crops?.includes(choice.crop) ?? true),
		),
		cropKeys: method.cropKeys,
		counts: countStatuses(cells, new Map(method.areas.map((area) => [area.areaKey, area.kind]))),
		rows,
		choice,
	};
}

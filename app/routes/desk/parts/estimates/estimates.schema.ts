import { z } from "zod";
import { weightings } from "#app/collect/weighting.ts";

/** The levels of the area tree that the table can be narrowed to. */
export const areaLevels = ["all", "region", "state", "district", "county"] as const;
export const steadinessChoices = ["all", "steady", "care", "rough"] as const;
/** What the figures of one measure can be sorted by. */
export const figureSorts = ["value", "standardError", "cv", "steadiness"];

/**
 * `?crop=&level=&state=&measure=&steadiness=&sort=&direction=&page=` of a survey's estimates. A wrong or missing part falls
 * back. `sort` is `area`, `respondents`, a measure's key or, of one measure, a column of its figures.
 */
export const EstimatesQuery = z.object({
	crop: z.string().max(60).catch("all"),
	level: z.enum(areaLevels).catch("all"),
	state: z.string().max(2).catch("all"),
	measure: z.string().max(80).catch("all"),
	steadiness: z.enum(steadinessChoices).catch("all"),
	sort: z.string().max(80).catch("area"),
	direction: z.enum(["asc", "desc"]).catch("asc"),
	page: z.coerce.number().int().min(1).max(100_000).catch(1),
});
export type EstimatesQuery = z.infer<typeof EstimatesQuery>;

/** `?try=&crop=&level=&sort=&direction=&page=` of what another choice of weights would change. */
export const WeightingQuery = z.object({
	try: z.enum(weightings).exclude(["design"]).optional().catch(undefined),
	crop: z.string().max(60).catch("all"),
	level: z.enum(areaLevels).catch("state"),
	sort: z.enum(["area", "difference", "errorChange"]).catch("area"),
	direction: z.enum(["asc", "desc"]).catch("asc"),
	page: z.coerce.number().int().min(1).max(100_000).catch(1),
});
export type WeightingQuery = z.infer<typeof WeightingQuery>;

/** `?crop=&show=&sort=&direction=&page=` of the comparison with a release's draft. */
export const ComparedQuery = z.object({
	crop: z.string().max(60).catch("all"),
	show: z.enum(["changed", "all"]).catch("changed"),
	sort: z.enum(["area", "difference"]).catch("area"),
	direction: z.enum(["asc", "desc"]).catch("asc"),
	page: z.coerce.number().int().min(1).max(100_000).catch(1),
});
export type ComparedQuery = z.infer<typeof ComparedQuery>;

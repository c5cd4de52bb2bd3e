import { z } from "zod";

/** A state's counties with the name of the district that each is in; empty for a county that is told by itself. */
export const DistrictsForm = z.object({
	decision: z.enum(["preview", "save", "undo"]),
	seen: z.coerce.number().int().min(0),
	district: z.record(z.string().regex(/^[0-9]{5}$/), z.string().trim().max(60).default("")).default({}),
});
export type DistrictsForm = z.infer<typeof DistrictsForm>;

/** The names that were typed, without the empty boxes, as they go back into the boxes. */
export const typedOf = ({ district }: DistrictsForm): Record<string, string> =>
	Object.fromEntries(Object.entries(district).filter(([, name]) => name !== ""));

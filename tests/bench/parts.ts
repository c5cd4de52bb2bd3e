import type { Part } from "./line.ts";

/**
 * What can be measured, by the name to ask for it with. A new part is a file beside this one and a line here. One that is not
 * asked for is not loaded: its libraries would count in the memory of the others.
 */
export const parts: Record<string, () => Promise<Part>> = {
	tally: async () => (await import("./tally.ts")).tally,
	submission: async () => (await import("./submission.ts")).submission,
	pages: async () => (await import("./pages.ts")).pages,
	map: async () => (await import("./map.ts")).map,
	api: async () => (await import("./api.ts")).api,
	desk: async () => (await import("./desk.ts")).desk,
	protect: async () => (await import("./protect.ts")).protect,
};

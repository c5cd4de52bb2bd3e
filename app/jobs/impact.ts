/** What is told of a season, in the page's order. Each has its name and a sentence of what it counts in `network:impact.of`. */
export const impactKeys = [
	...(["surveys", "reached", "answers", "responseRate"] as const),
	...(["counties", "releases", "reports", "reads", "pdfs", "mails", "downloads"] as const),
] as const;
export type ImpactKey = (typeof impactKeys)[number];
/** Null where a season has none to tell. */
export type SeasonImpact = Record<ImpactKey, number | null> & { season: number };
/** `readsSince` is the first day on which a read was counted, `filesSince` that of a file taken from the open pages. */
export type Impact = {
	seasons: SeasonImpact[];
	now: { subscribers: number; members: number; readsSince: string | null; filesSince: string | null };
};
export const impactNowKeys = ["subscribers", "members"] as const;

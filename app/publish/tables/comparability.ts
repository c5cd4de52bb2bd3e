import { groupBy } from "#app/lib/group-by.ts";
import { daysInYear } from "#app/lib/day-of-year.ts";
import type { ReleaseMeasure } from "../release.ts";
import { chosenAreas, isIn, type TableCatalogue, type TableRelease } from "./catalogue.ts";
import type { TableSelection } from "./selection.ts";

/** Releases by number that are alike in something; the value where it is one to tell, as a setting's. */
export type Alike = { releases: number[]; value?: number };
export const noteKinds = [
	...(["editions", "replaced", "form", "kind", "unit", "wording", "missing"] as const),
	...(["setting", "code", "counties", "districts", "leap"] as const),
] as const;
/** One thing in which the releases of a table differ, or that a reader has to know of one of them. */
export type TableNote = {
	kind: (typeof noteKinds)[number];
	/** Key of the measure, or of the setting, that it is about. */
	of?: string;
	groups: Alike[];
};

/** What was not the same in the chosen releases, so that a difference can be of the making and not of the crop. */
export function notesOf(catalogue: TableCatalogue, selection: TableSelection): TableNote[] {
	const releases = catalogue.releases
		.filter(({ number }) => selection.release.includes(number))
		.toSorted((a, b) => a.season - b.season || a.number - b.number);
	const replaced = releases.filter(({ replacedBy }) => replacedBy !== null).map(({ number }) => number);
	return [
		...editions(releases),
		...(replaced.length > 0 ? [{ kind: "replaced" as const, groups: [{ releases: replaced }] }] : []),
		...differing("form", releases, ({ formKey }) => formKey),
		...selection.measure.flatMap((measure) => ofMeasure(measure, releases, catalogue)),
		...settings(releases),
		...differing("code", releases, ({ codeVersion }) => codeVersion),
		...ofAreas(releases, catalogue, selection),
	];
}

/** A note where the releases are not all alike in what is read of them. */
function differing(
	kind: TableNote["kind"],
	releases: TableRelease[],
	read: (release: TableRelease) => unknown,
	of?: string,
): TableNote[] {
	const groups = [...groupBy(releases, (release) => JSON.stringify(read(release)))];
	if (groups.length < 2) return [];
	return [{ kind, of, groups: groups.map(([, alike]) => ({ releases: alike.map(({ number }) => number) })) }];
}

function editions(releases: TableRelease[]): TableNote[] {
	return [...groupBy(releases, ({ seriesId }) => seriesId).values()]
		.filter((of) => of.length > 1)
		.map((of) => ({ kind: "editions", groups: [{ releases: of.map(({ number }) => number) }] }));
}

function ofMeasure(key: string, releases: TableRelease[], catalogue: TableCatalogue): TableNote[] {
	const find = (number: number) => catalogue.measures[number]?.find((measure) => measure.key === key);
	const lacking = releases.filter(({ number }) => !find(number));
	const having = releases.filter(({ number }) => find(number));
	const read = (part: (measure: ReleaseMeasure) => unknown) => (release: TableRelease) => part(find(release.number)!);
	const isDay = having.some(({ number }) => find(number)?.unit === "day");
	return [
		...differing(
			"kind",
			having,
			read(({ kind }) => kind),
			key,
		),
		...differing(
			"unit",
			having,
			read(({ unit, decimals }) => [unit, decimals]),
			key,
		),
		...differing(
			"wording",
			having,
			read(({ label, description }) => [label, description]),
			key,
		),
		...(lacking.length > 0
			? [{ kind: "missing" as const, of: key, groups: [{ releases: lacking.map(({ number }) => number) }] }]
			: []),
		...(isDay ? differing("leap", having, ({ season }) => daysInYear(season), key) : []),
	];
}

/** Each setting of what is withheld and what is steady, with its values; a release that tells none is not spoken of. */
function settings(releases: TableRelease[]): TableNote[] {
	const keys = [...new Set(releases.flatMap(({ rules }) => Object.keys(rules)))] as (keyof TableRelease["rules"])[];
	return keys.toSorted().flatMap((of): TableNote[] => {
		const groups = [...groupBy(releases, ({ rules }) => rules[of])].filter(([value]) => value !== undefined);
		if (groups.length < 2) return [];
		return [
			{
				kind: "setting",
				of,
				groups: groups.map(([value, alike]) => ({ releases: alike.map(({ number }) => number), value })),
			},
		];
	});
}

/** Which counties a release covers, and in which district each lies; districts matter where a table tells of them. */
function ofAreas(releases: TableRelease[], catalogue: TableCatalogue, selection: TableSelection): TableNote[] {
	const counties = catalogue.areas.filter(({ kind }) => kind === "county");
	const shared = counties.filter((county) => releases.every(({ number }) => isIn(county, [number])));
	const tellsDistricts = chosenAreas(catalogue, selection).some(({ kind }) => kind === "district");
	return [
		...differing("counties", releases, ({ number }) =>
			counties.filter((county) => isIn(county, [number])).map(({ key }) => key),
		),
		...(tellsDistricts
			? differing("districts", releases, ({ number }) => shared.map(({ liesIn }) => liesIn[number]))
			: []),
	];
}

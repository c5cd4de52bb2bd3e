import { type AreaKind, areaKinds } from "../cell.ts";
import { type TableCatalogue, countCells, cropsOf, measuresOf } from "./catalogue.ts";
import { tableLimits } from "./limits.ts";

export const tableDimensions = ["season", "measure", "crop", "area"] as const;
export type TableDimension = (typeof tableDimensions)[number];
/** What stands beside a figure if wanted. Why there is none is always said. */
export const shownParts = ["error", "interval", "status"] as const;
export type ShownPart = (typeof shownParts)[number];
export const tableLayouts = ["wide", "long"] as const;

/** A table by its codes: what its address says. */
export type TableSelection = {
	release: number[];
	measure: string[];
	crop: string[];
	/** Levels of area that are taken whole, within the states if some are named. */
	kind: AreaKind[];
	state: string[];
	/** Areas taken by name, besides. */
	area: string[];
	layout: (typeof tableLayouts)[number];
	/** What goes across in a wide table; the rest names its rows. */
	columns: TableDimension[];
	show: ShownPart[];
	/** Editions that were replaced are offered too. */
	revisions: boolean;
	/** Text to find areas by. */
	q: string;
	page: number;
};

/** What is wrong with a choice; the words are `common:problem.<code>`. */
export type SelectionProblem = { field: string; code: string; detail?: Record<string, string | number> };
export type ReadSelection = { selection: TableSelection; problems: SelectionProblem[] };

const lists = ["release", "measure", "crop", "kind", "state", "area", "columns", "show"] as const;
type List = (typeof lists)[number];
/** Any of these in an address means that somebody has chosen. */
const choices: readonly string[] = [...lists, "layout"];

/** The values of a list, joined by commas or one by one, each once and in the order given. */
const given = (search: URLSearchParams, name: string): string[] => [
	...new Set(search.getAll(name).flatMap((value) => value.split(",").filter((code) => code !== ""))),
];

/** Numbers of the releases that an address names, for reading their catalogue. */
export function wantedReleases(search: URLSearchParams): number[] {
	return given(search, "release")
		.filter((text) => /^\d{1,9}$/.test(text))
		.map(Number)
		.slice(0, tableLimits.releases);
}

export const wantsRevisions = (search: URLSearchParams): boolean => search.has("revisions");

/** What an address chooses, held to what there is. What it does not know is left out and told; the rest stays chosen. */
export function readSelection(search: URLSearchParams, catalogue: TableCatalogue): ReadSelection {
	const view = {
		revisions: wantsRevisions(search),
		q: (search.get("q") ?? "").trim().slice(0, 200),
		page: /^[1-9]\d{0,5}$/.test(search.get("page") ?? "") ? Number(search.get("page")) : 1,
	};
	if (!choices.some((name) => search.has(name)))
		return { selection: { ...beginning(catalogue), ...view }, problems: [] };

	const problems: SelectionProblem[] = [];
	const take = <T extends string>(field: List, known: readonly T[], most: number): T[] => {
		const listed = new Set<string>(known);
		const asked = given(search, field);
		const unknown = asked.filter((code) => !listed.has(code));
		if (unknown.length > 0) problems.push({ field, code: "codes_unknown", detail: { codes: told(unknown) } });
		// In one order, whatever was named first: the same choice has the same address.
		const taken = known.filter((code) => asked.includes(code));
		if (taken.length > most) problems.push({ field, code: "choices_limit", detail: { max: most } });
		return taken.slice(0, most);
	};

	const release = takeReleases(catalogue, take, problems);
	// What only other releases have stays chosen too, so that nothing is lost while seasons are chosen anew.
	const all = catalogue.releases.map(({ number }) => number);
	const layout = search.get("layout") ?? "wide";
	if (layout !== "wide" && layout !== "long") problems.push({ field: "layout", code: "choice_wrong" });
	const selection: TableSelection = {
		release,
		measure: take("measure", [...measuresOf(catalogue, all).keys()], tableLimits.codes),
		crop: take("crop", cropsOf(catalogue, all), tableLimits.codes),
		kind: take("kind", areaKinds, areaKinds.length),
		state: take("state", statesOf(catalogue), tableLimits.codes),
		area: take("area", keysOf(catalogue.areas), tableLimits.codes),
		layout: layout === "long" ? "long" : "wide",
		columns: take("columns", tableDimensions, tableDimensions.length),
		show: take("show", shownParts, shownParts.length),
		...view,
	};
	return { selection, problems: [...problems, ...missing(selection, problems), ...tooLarge(selection, catalogue)] };
}

const keysOf = (areas: { key: string }[]) => areas.map(({ key }) => key);
export const statesOf = ({ areas }: TableCatalogue) => keysOf(areas.filter(({ kind }) => kind === "state"));

/** A few of the codes that mean nothing here, none at any length: somebody made them up. */
const told = (codes: string[]) =>
	codes
		.slice(0, 5)
		.map((code) => (code.length > 40 ? `${code.slice(0, 40)}…` : code))
		.join(", ") + (codes.length > 5 ? " …" : "");

function takeReleases(
	{ releases }: TableCatalogue,
	take: (field: List, known: readonly string[], most: number) => string[],
	problems: SelectionProblem[],
): number[] {
	const taken = take("release", releases.map(({ number }) => `${number}`).toReversed(), tableLimits.releases).map(
		Number,
	);
	const gone = releases.filter(({ number, withdrawn }) => withdrawn && taken.includes(number));
	for (const { number } of gone) problems.push({ field: "release", code: "release_gone", detail: { number } });
	return taken.filter((number) => !gone.some((release) => release.number === number));
}

/** The lists that a table cannot do without and that are empty. */
function emptyLists(selection: TableSelection): string[] {
	const needed = (["release", "measure", "crop"] as const).filter((field) => selection[field].length === 0);
	const noAreas = selection.kind.length + selection.area.length === 0;
	const noColumns = selection.layout === "wide" && selection.columns.length === 0;
	return [...needed, ...(noAreas ? ["kind"] : []), ...(noColumns ? ["columns"] : [])];
}

/** Each such list, unless something worse is said of it already. */
function missing(selection: TableSelection, problems: SelectionProblem[]): SelectionProblem[] {
	const said = new Set(problems.map(({ field }) => field));
	const none = emptyLists(selection)
		.filter((field) => !said.has(field))
		.map((field) => ({ field, code: "choose_some" }));
	const all = selection.layout === "wide" && selection.columns.length === tableDimensions.length;
	return all ? [...none, { field: "columns", code: "rows_left" }] : none;
}

function tooLarge(selection: TableSelection, catalogue: TableCatalogue): SelectionProblem[] {
	const cells = countCells(catalogue, selection);
	const detail = { cells, max: tableLimits.cells };
	return cells > tableLimits.cells ? [{ field: "release", code: "cells_limit", detail }] : [];
}

/** Whether there is a table to show and to take: some problems only leave a part of what was asked for out. */
export const canBeTold = ({ selection, problems }: ReadSelection): boolean =>
	emptyLists(selection).length === 0 && !problems.some(({ code }) => code === "rows_left" || code === "cells_limit");

/** Where one begins: the latest season and those before it of the same form, crop by crop, for the whole network. */
function beginning(catalogue: TableCatalogue): Omit<TableSelection, "revisions" | "q" | "page"> {
	const standing = catalogue.releases.filter(({ withdrawn, replacedBy }) => !withdrawn && replacedBy === null);
	const alike = standing.filter(({ formKey }) => formKey === standing[0]?.formKey).slice(0, 3);
	const release = alike.map(({ number }) => number).toReversed();
	return {
		release,
		measure: [...measuresOf(catalogue, release).keys()].slice(0, 1),
		crop: cropsOf(catalogue, release),
		kind: ["region"],
		state: [],
		area: [],
		layout: "wide",
		columns: ["season"],
		show: ["interval"],
	};
}

/**
 * The address of a table, the same for the same choice: lists in their order with commas, nothing of which page was open or
 * what was searched for.
 */
export function searchOf(selection: TableSelection): string {
	const search = new URLSearchParams();
	for (const name of lists) if (selection[name].length > 0) search.set(name, selection[name].join(","));
	search.set("layout", selection.layout);
	// A comma may stand as it is, which reads better.
	return search.toString().replaceAll("%2C", ",");
}

import type { Highs } from "highs";
import type { ProtectionRules } from "#app/protect/rules.ts";
import { type Amount, type Cells, counties, crops, districtOf } from "./farms.ts";

/** A cell that somebody narrowed down further than the rules allow. */
export interface Told {
	key: string;
	quantity: Amount;
	attacker: string;
}
/** One release, as who keeps it knows it, and the truth beside it. */
export interface Seen {
	cells: Cells;
	/** keys of the cells with figures, and of published zeros */
	shown: ReadonlySet<string>;
}

const add = (list: readonly number[]) => list.reduce((a, b) => a + b, 0);
const partsOf = (cells: Cells, key: string, quantity: Amount) =>
	[...(cells.get(key)?.values() ?? [])].map((part) => part[quantity]).toSorted((a, b) => b - a);
const valueOf = (cells: Cells, key: string, quantity: Amount) => add(partsOf(cells, key, quantity));
const leafKeys = counties.flatMap((county) => crops.map((crop) => `${county}|${crop}`));
const areas = ["network", "d1", "d2", ...counties];
const allKeys = areas.flatMap((area) => [...crops, "all"].map((crop) => `${area}|${crop}`));

/** The smallest cells that a cell is the sum of. */
function leavesOf(key: string): string[] {
	const [area, crop] = key.split("|") as [string, string];
	return leafKeys.filter((leaf) => {
		const [county, what] = leaf.split("|") as [string, string];
		return [county, districtOf(county), "network"].includes(area) && (crop === "all" || crop === what);
	});
}

/** By how much the amounts of these owners, taken as a cell, must stay uncertain; 0 where they may be shown. */
function levelOf(parts: readonly number[], rules: ProtectionRules): number {
	const [first = 0, second = 0] = parts;
	const part = rules.dominancePercent / 100;
	const remainder = part * first - (add(parts) - first - second);
	const { largest } = rules;
	const joined = largest ? (100 / largest.percent) * add(parts.slice(0, largest.owners)) - add(parts) : 0;
	const few = parts.length > 0 && parts.length < rules.minimumOwners ? part * first : 0;
	const level = Math.max(0, remainder, joined, few);
	return level > 1e-9 * add(parts) ? level : 0;
}

/** Sums that must stay uncertain: a cell, or the cells of one line that are together too few. */
interface Aim {
	key: string;
	terms: [variable: string, factor: number][];
	value: number;
	level: number;
	/** nothing is negative, so a cell's own level ends at 0 */
	signed: boolean;
	owners: ReadonlySet<number>;
}

/** Rows of a program and what they are about, for somebody who may know more. */
class Attack {
	attacks = 0;

	constructor(
		readonly highs: Highs,
		readonly rows: readonly string[],
		readonly bounds: readonly string[] = [],
	) {}

	/** Whether the aim is found more closely than allowed, from above or, for the public, from below. */
	finds(aim: Aim, known: readonly string[], sides: readonly ("Maximize" | "Minimize")[]): boolean {
		const near = 1e-5 * (1 + Math.abs(aim.value));
		return sides.some((side) => {
			const reached = this.#push(aim, known, side);
			const down = aim.signed ? aim.level : Math.min(aim.level, aim.value);
			return side === "Maximize" ? reached < aim.value + aim.level - near : reached > aim.value - down + near;
		});
	}

	/** How far above and below the truth the aim may lie. */
	room(aim: Aim, known: readonly string[] = []): [above: number, below: number] {
		return [this.#push(aim, known, "Maximize") - aim.value, aim.value - this.#push(aim, known, "Minimize")];
	}

	#push({ terms }: Aim, known: readonly string[], side: "Maximize" | "Minimize"): number {
		this.attacks += 1;
		const sum = terms.map(([name, factor]) => `${factor < 0 ? "-" : "+"} ${name}`).join(" ");
		const rows = [...this.rows, ...known];
		const text = `${side}\n obj: ${sum}\nSubject To\n ${rows.join("\n ")}\nBounds\n ${this.bounds.join("\n ")}\nEnd`;
		const result = this.highs.solve(text, { output_flag: false });
		if (/unbounded/i.test(result.Status)) return side === "Maximize" ? Infinity : -Infinity;
		if (result.Status !== "Optimal") throw new Error(`the attack ended ${result.Status}`);
		return result.ObjectiveValue;
	}
}

/** What a smallest cell of a release is called in a program. */
const nameIn = (edition: number) => (leaf: string) => `x${edition}_${leaf.replace("|", "_")}`;
const sumOf = (names: readonly string[]) => names.join(" + ");
const round = (value: number) => Number(value.toPrecision(15));

export function attackTable(
	highs: Highs,
	cells: Cells,
	shown: ReadonlySet<string>,
	quantities: readonly Amount[],
	rules: ProtectionRules,
	{ owners }: { owners: boolean },
): { broken: Told[]; attacks: number } {
	const broken: Told[] = [];
	let attacks = 0;
	for (const quantity of quantities) {
		const name = nameIn(0);
		const open = allKeys.filter((key) => shown.has(key) || !cells.has(key));
		const rows = open.map((key) => `${sumOf(leavesOf(key).map(name))} = ${round(valueOf(cells, key, quantity))}`);
		const attack = new Attack(highs, rows);
		const aims = [...cellAims(cells, shown, quantity, rules, name), ...lineAims(cells, shown, quantity, rules, name)];
		for (const aim of aims) {
			if (attack.finds(aim, [], ["Maximize", "Minimize"]))
				broken.push({ key: aim.key, quantity, attacker: "everybody" });
		}
		for (const aim of aims.filter(({ key }) => !key.includes(" with "))) {
			for (const owner of owners ? likeliest(cells, quantity) : []) {
				const alone = aim.owners.size === 1 && aim.owners.has(owner);
				if (alone) continue;
				const known = ownKnowledge(cells, owner, quantity, name);
				const sides = aim.owners.has(owner) ? (["Maximize"] as const) : (["Maximize", "Minimize"] as const);
				if (attack.finds(aim, known, sides)) broken.push({ key: aim.key, quantity, attacker: `owner ${owner}` });
			}
		}
		attacks += attack.attacks;
	}
	return { broken, attacks };
}

function cellAims(
	cells: Cells,
	shown: ReadonlySet<string>,
	quantity: Amount,
	rules: ProtectionRules,
	name: (leaf: string) => string,
): Aim[] {
	return [...cells].flatMap(([key, owners]) => {
		const parts = partsOf(cells, key, quantity);
		const level = levelOf(parts, rules);
		const terms = leavesOf(key).map((leaf): [string, number] => [name(leaf), 1]);
		const aim = { key, terms, value: add(parts), level, signed: false, owners: new Set(owners.keys()) };
		return level > 0 && !shown.has(key) ? [aim] : [];
	});
}

/** Two or more withheld cells of one line that, as one cell, would be withheld too. */
function lineAims(
	cells: Cells,
	shown: ReadonlySet<string>,
	quantity: Amount,
	rules: ProtectionRules,
	name: (leaf: string) => string,
): Aim[] {
	const lines = [
		...areas.map((area) => crops.map((crop) => `${area}|${crop}`)),
		...[["d1", "d2"], counties.slice(0, 2), counties.slice(2)].flatMap((parts) =>
			[...crops, "all"].map((crop) => parts.map((area) => `${area}|${crop}`)),
		),
	];
	return lines.flatMap((line) => {
		const hidden = line.filter((key) => cells.has(key) && !shown.has(key));
		const owners = new Map<number, number>();
		for (const key of hidden) {
			for (const [owner, part] of cells.get(key)!) owners.set(owner, (owners.get(owner) ?? 0) + part[quantity]);
		}
		const parts = [...owners.values()].toSorted((a, b) => b - a);
		const level = levelOf(parts, rules);
		if (hidden.length < 2 || level === 0) return [];
		const terms = hidden.flatMap((key) => leavesOf(key).map((leaf): [string, number] => [name(leaf), 1]));
		return [
			{ key: hidden.join(" with "), terms, value: add(parts), level, signed: false, owners: new Set(owners.keys()) },
		];
	});
}

/** Owners worth trying: the one with most, and those who are alone somewhere. */
function likeliest(cells: Cells, quantity: Amount): number[] {
	const most = [...cells.get("network|all")!].toSorted(([, a], [, b]) => b[quantity] - a[quantity])[0]![0];
	const alone = leafKeys.flatMap((leaf) => (cells.get(leaf)?.size === 1 ? [...cells.get(leaf)!.keys()] : []));
	return [...new Set([most, ...alone])].slice(0, 4);
}

/** Each cell holds at least one's own part, and where one is alone just that. */
function ownKnowledge(cells: Cells, owner: number, quantity: Amount, name: (leaf: string) => string): string[] {
	return leafKeys.flatMap((leaf) => {
		const owners = cells.get(leaf);
		const part = owners?.get(owner);
		if (!owners || !part) return [];
		return [`${name(leaf)} ${owners.size === 1 ? "=" : ">="} ${round(part[quantity])}`];
	});
}

/** Tries everything that is withheld in any release, and every difference of too few owners, with all releases at once. */
export function attackEditions(highs: Highs, editions: readonly Seen[], rules: ProtectionRules): Told[] {
	if (editions.length === 0) return [];
	const quantity = "lb" as const;
	const rows = editions.flatMap(({ cells, shown }, e) => {
		const open = allKeys.filter((key) => shown.has(key) || !cells.has(key));
		return open.map((key) => `${sumOf(leavesOf(key).map(nameIn(e)))} = ${round(valueOf(cells, key, quantity))}`);
	});
	const attack = new Attack(highs, [...rows, ...sameAnswers(editions)]);
	const aims = editions.flatMap(({ cells, shown }, e) => [
		...cellAims(cells, shown, quantity, rules, nameIn(e)),
		...editions.slice(0, e).flatMap((before, b) => differenceAims(before.cells, cells, [nameIn(b), nameIn(e)], rules)),
	]);
	return aims
		.filter((aim) => attack.finds(aim, [], ["Maximize", "Minimize"]))
		.map(({ key }) => ({ key, quantity, attacker: "who kept every release" }));
}

/**
 * Tries what two surveys of the same growers withhold, for who keeps both releases and knows of which cells each owner has as
 * much in both. What the first release tells by itself is no fault of the second: it may not bring anybody nearer.
 */
export function attackBeside(
	highs: Highs,
	{ there, here }: { there: Seen; here: Seen },
	quantity: Amount,
	rules: ProtectionRules,
	{ owners }: { owners: boolean },
): { broken: Told[]; tried: number; knownBefore: number } {
	const rowsOf = ({ cells, shown }: Seen, e: number) =>
		allKeys
			.filter((key) => !cells.has(key) || shown.has(key))
			.map((key) => `${sumOf(leavesOf(key).map(nameIn(e)))} = ${round(valueOf(cells, key, quantity))}`);
	const same = allKeys.filter((key) => hasSame(there.cells, here.cells, key, quantity)).map(sameIn(0, 1));
	const rows = (seen: Seen) => [...rowsOf(seen, 0), ...rowsOf(there, 1), ...same];
	const before = new Attack(highs, rows({ ...here, shown: new Set() }));
	const after = new Attack(highs, rows(here));
	const aims = [here, there].flatMap(({ cells, shown }, e) => cellAims(cells, shown, quantity, rules, nameIn(e)));
	const broken: Told[] = [];
	let knownBefore = 0;
	const both = ["Maximize", "Minimize"] as const;
	for (const aim of aims) {
		for (const { attacker, known, sides } of [
			{ attacker: "who kept the release of another survey", known: [], sides: both },
			...(owners ? ownersOf({ there, here }, quantity, aim) : []),
		]) {
			if (!after.finds({ ...aim, level: 0.98 * aim.level }, known, sides)) continue;
			const [above, below] = before.room(aim, known);
			const left = Math.min(aim.level, above, sides.length === 1 || aim.value < aim.level ? aim.level : below);
			if (after.finds({ ...aim, level: 0.98 * left }, known, sides)) broken.push({ key: aim.key, quantity, attacker });
			else knownBefore += 1;
		}
	}
	return { broken, tried: aims.length, knownBefore };
}

/** Some owners, each with the own answers to both surveys. */
function ownersOf({ there, here }: { there: Seen; here: Seen }, quantity: Amount, aim: Aim) {
	return likeliest(here.cells, quantity).flatMap((owner) => {
		const alone = aim.owners.size === 1 && aim.owners.has(owner);
		if (alone) return [];
		const known = [here, there].flatMap(({ cells }, e) => ownKnowledge(cells, owner, quantity, nameIn(e)));
		const sides = aim.owners.has(owner) ? (["Maximize"] as const) : (["Maximize", "Minimize"] as const);
		return [{ attacker: `owner ${owner}`, known, sides }];
	});
}

/** That a cell is the same in both. */
function sameIn(e: number, other: number): (key: string) => string {
	return (key) => {
		const leaves = leavesOf(key);
		return `${sumOf(leaves.map(nameIn(e)))} ${leaves.map((leaf) => `- ${nameIn(other)(leaf)}`).join(" ")} = 0`;
	};
}

function hasSame(there: Cells, here: Cells, key: string, quantity: Amount): boolean {
	const owners = new Set([...(there.get(key)?.keys() ?? []), ...(here.get(key)?.keys() ?? [])]);
	return [...owners].every(
		(owner) => (there.get(key)?.get(owner)?.[quantity] ?? 0) === (here.get(key)?.get(owner)?.[quantity] ?? 0),
	);
}

/** Cells in which nobody's answers differ from one release to another are known to be the same. */
function sameAnswers(editions: readonly Seen[]): string[] {
	return editions.flatMap((now, e) =>
		editions
			.slice(0, e)
			.flatMap((before, b) =>
				allKeys.filter((key) => changed(before.cells, now.cells, key).length === 0).map(sameIn(e, b)),
			),
	);
}

function changed(before: Cells, now: Cells, key: string): [owner: number, by: number][] {
	const owners = new Set([...(before.get(key)?.keys() ?? []), ...(now.get(key)?.keys() ?? [])]);
	return [...owners].flatMap((owner): [number, number][] => {
		const [was, is] = [before.get(key)?.get(owner), now.get(key)?.get(owner)];
		if (was && is && was.trees === is.trees && was.lb === is.lb) return [];
		return [[owner, (is?.lb ?? 0) - (was?.lb ?? 0)]];
	});
}

function differenceAims(
	before: Cells,
	now: Cells,
	[was, is]: [(leaf: string) => string, (leaf: string) => string],
	rules: ProtectionRules,
): Aim[] {
	return allKeys.flatMap((key) => {
		const changes = changed(before, now, key);
		const sizes = changes.map(([, by]) => Math.abs(by)).toSorted((a, b) => b - a);
		const few = changes.length < rules.minimumOwners || levelOf(sizes, rules) > 0;
		const level = (rules.dominancePercent / 100) * (sizes[0] ?? 0);
		if (!few || level === 0 || !now.has(key)) return [];
		const leaves = leavesOf(key);
		const terms = leaves.flatMap((leaf): [string, number][] => [
			[is(leaf), 1],
			[was(leaf), -1],
		]);
		const value = add(changes.map(([, by]) => by));
		return [{ key: `change of ${key}`, terms, value, level, signed: true, owners: new Set<number>() }];
	});
}

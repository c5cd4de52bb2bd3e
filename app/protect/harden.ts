import type { AuditFailure, AuditResult } from "./audit.ts";
import type { OwnCell } from "./levels.ts";
import { guardedSums, type LineSum } from "./lines.ts";
import type { ProtectionRules } from "./rules.ts";
import type { ProtectionTable } from "./table.ts";

/** After so many rounds of withholding more, all that has growers is withheld. */
const ROUNDS = 12;

/** What a round works on. `given` stays withheld; `more` adds shields that give each wish its room. */
interface Hardening {
	table: ProtectionTable;
	rules: ProtectionRules;
	own: readonly OwnCell[];
	/** Cells that tell nothing when withheld, as they are known. */
	useless: ReadonlySet<number>;
	/** Whether anything is known besides this table, which withholding does not hide. */
	knownOutside: boolean;
	audit: (shields: ReadonlySet<number>) => AuditResult;
	more: (wishes: readonly OwnCell[], given: ReadonlySet<number>) => Set<number> | null;
	/** What to withhold besides where other surveys' releases tell too much beside this one. */
	besideOthers: (given: ReadonlySet<number>) => Set<number>;
}

/**
 * Withholds more until the audit passes. Shields that were searched for to the end pass at once, as they are chosen against
 * all that the audit tries; those of a search that met its limits, or of a table taken apart, may not. What it finds is
 * wished for: room for a cell that somebody narrows down, one cell more of a line whose sum tells. Nothing withheld is shown
 * again, so that each round is nearer to the end, at which everything is withheld.
 *
 * What is known from outside can leave a fault that stands when everything is withheld. As withholding more never makes an
 * interval narrower, no pattern mends it, and no cell is withheld for it: the rest of the draft is made safe, the audit fails
 * with that fault marked `beyondHelp`, and the draft is blocked. It is not passed over though other releases cause it: what
 * the draft shows besides might bring it nearer still, and an audit that passes must mean that nothing was found.
 */
export function harden(chosen: ReadonlySet<number>, work: Hardening): { shields: Set<number>; audit: AuditResult } {
	const own = new Set(work.own.map(({ index }) => index));
	const asked = new Map<string, number>();
	const all = [...work.table.cells.keys()].filter((index) => work.table.cells[index]!.owners > 0 && !own.has(index));
	const nothingShown = once(() => work.audit(new Set(all)));
	const beyondHelp = once(() => new Set(work.knownOutside ? nothingShown().failures.map(nameOf) : []));
	let shields = new Set(chosen);
	for (let round = 0; round < ROUNDS; round++) {
		const audit = work.audit(shields);
		if (audit.passed) return { shields, audit };
		const mendable = audit.failures.filter((failure) => !beyondHelp().has(nameOf(failure)));
		if (mendable.length === 0) return { shields, audit: marked(audit, beyondHelp()) };
		const [beside, here] = [mendable.filter(isBeside), mendable.filter((failure) => !isBeside(failure))];
		const withheld = new Set([...own, ...shields]);
		const given = new Set([...withheld, ...(beside.length > 0 ? work.besideOthers(withheld) : [])]);
		const wishes = wishesFor(work, here, given, asked);
		const added = work.more(wishes, given);
		if (!added) break;
		shields = new Set([...given, ...wishes.map(({ index }) => index), ...added].filter((index) => !own.has(index)));
	}
	return { shields: new Set(all), audit: marked(nothingShown(), beyondHelp()) };
}

const isBeside = ({ kind }: AuditFailure) => kind === "by_other_survey";

const nameOf = ({ cellKey, quantity, kind }: AuditFailure) => `${cellKey} ${quantity} ${kind}`;

function marked(audit: AuditResult, beyondHelp: ReadonlySet<string>): AuditResult {
	const failures = audit.failures.map((one) => (beyondHelp.has(nameOf(one)) ? { ...one, beyondHelp: true } : one));
	return { ...audit, failures };
}

function once<T>(make: () => T): () => T {
	let made: { value: T } | undefined;
	return () => (made ??= { value: make() }).value;
}

/** @param asked how many times each cell's room was asked for: each time it is doubled. */
function wishesFor(
	work: Hardening,
	failures: readonly AuditFailure[],
	given: ReadonlySet<number>,
	asked: Map<string, number>,
): OwnCell[] {
	const { table } = work;
	const position = new Map(table.cells.map((cell, index) => [cell.key, index]));
	const again = (key: string) => {
		const times = asked.get(key) ?? 0;
		asked.set(key, times + 1);
		return 2 ** times;
	};
	const ownOf = new Map(work.own.map((cell) => [cell.index, cell]));
	const narrow = groupFailures(failures.filter(({ kind }) => kind !== "in_line"));
	const cells = [...narrow].flatMap(([key, quantities]): OwnCell[] => {
		const index = position.get(key)!;
		const cell = ownOf.get(index) ?? { index, reasons: [], levels: leastLevels(work, index) };
		const factor = again(key);
		const levels = Object.entries(cell.levels).map(([quantity, level]) => {
			const failed = quantities.has(quantity) || quantities.has(null);
			return [quantity, failed ? level * factor : level] as const;
		});
		return [{ ...cell, levels: Object.fromEntries(levels) }];
	});
	const inLine = new Set(
		failures.filter(({ kind }) => kind === "in_line").map(({ cellKey }) => position.get(cellKey)!),
	);
	const sums = guardedSums(table, work.rules, new Set(ownOf.keys()), given);
	const lines = sums.filter((line) => line.cells.every((cell) => inLine.has(cell)));
	return [...cells, ...lines.map((line) => wishOfLine(work, line, given, again))];
}

/** One more cell of the line, or more room for one withheld already: the least one that is not withheld yet. */
function wishOfLine(
	work: Hardening,
	line: LineSum,
	given: ReadonlySet<number>,
	again: (key: string) => number,
): OwnCell {
	const { table } = work;
	const usable = line.others.filter((index) => !work.useless.has(index));
	const shown = usable.filter((index) => !given.has(index));
	const weight = (index: number) => shareOfAll(table, index);
	const index = (shown.length > 0 ? shown : usable.length > 0 ? usable : line.cells).reduce((least, one) =>
		weight(one) < weight(least) ? one : least,
	);
	const factor = again(`line ${table.cells[index]!.key}`);
	const least = leastLevels(work, index);
	const levels = table.quantities.map(({ key }) => {
		const { total } = table.cells[index]!.quantities[key]!;
		return [key, Math.max(least[key]!, total > 0 ? factor * (line.levels[key] ?? 0) : 0)] as const;
	});
	return { index, reasons: [], levels: Object.fromEntries(levels) };
}

/** What a cell that is withheld for others' sake must keep to itself: p% of its largest owner. */
function leastLevels({ table, rules }: Hardening, index: number): Record<string, number> {
	const { quantities } = table.cells[index]!;
	return Object.fromEntries(
		table.quantities.map(({ key, counted }) => {
			const level = (rules.dominancePercent / 100) * quantities[key]!.top1;
			return [key, counted && level > 0 ? Math.max(1, level) : level] as const;
		}),
	);
}

function groupFailures(failures: readonly AuditFailure[]): Map<string, Set<string | null>> {
	const groups = new Map<string, Set<string | null>>();
	for (const { cellKey, quantity } of failures) {
		const quantities = groups.get(cellKey);
		if (quantities) quantities.add(quantity);
		else groups.set(cellKey, new Set([quantity]));
	}
	return groups;
}

function shareOfAll({ cells, quantities }: ProtectionTable, index: number): number {
	return quantities.reduce((sum, { key }) => {
		const all = cells.reduce((most, cell) => Math.max(most, cell.quantities[key]!.total), 0);
		return sum + (all > 0 ? cells[index]!.quantities[key]!.total / all : 0);
	}, 0);
}

import type { AuditFailure, AuditResult } from "./audit.ts";
import { holdsByOwner, type KnownPart, type Target, tryOwners } from "./audit-owners.ts";
import { intervalsOf, PointSearch } from "./audit-search.ts";
import { type AuditBlock, blocksOf } from "./audit-system.ts";
import { roomOf, ROUNDING } from "./audit-widths.ts";
import { type JointSystem, JointTables } from "./joint-tables.ts";
import type { OwnCell } from "./levels.ts";
import type { ProtectionRules } from "./rules.ts";
import type { SharedReleases } from "./shared-cells.ts";
import type { Solver } from "./solver.ts";
import type { ProtectionTable } from "./table.ts";
import type { Told } from "./told.ts";

/** A little is left of what there is, so that the two programs' roundings do not differ. */
const LEFT = 0.99;
/** More than is asked, so that rounding in the audit does not count as a failure. */
const MARGIN = 1 + 1e-5;
/** Showing a cell is worth at most this share of reaching a level. */
const DEAREST = 1e-2;
const STILL = 1e-8;

export interface Draft {
	table: ProtectionTable;
	rules: ProtectionRules;
	own: readonly OwnCell[];
	told: Told;
	/** Whether owners use what they know. */
	ownersAttack: boolean;
	/** by cell: what withholding it loses */
	loss: readonly number[];
}

export interface OthersFound {
	failures: AuditFailure[];
	tried: number;
	runs: number;
}

/** Something that must stay uncertain, and the cell that it is; with the owners who find it too closely. */
type Aim = Target & { cellKey: string; objectors?: readonly string[] };

/**
 * A draft and the releases of other surveys of the season as one linear program for each quantity that they share: all
 * lines of all of them, what each shows, and a cell in which nobody's amount differs as one unknown. So sums over cells
 * that both withhold, of which each release tells another, are known to whoever keeps both. Asked are the levels of what
 * the draft and the others withhold for its own sake, cut to the room that the others leave with nothing of the draft shown.
 * Each owner is tried too, with the own answers to all of these surveys.
 * Not covered: the sums of a line's withheld cells, earlier releases of the draft's own survey, and districts that were
 * drawn otherwise for the other survey, whose lines are taken as they are drawn here.
 */
export class BesideOthers {
	readonly #joint: JointTables[];

	constructor(
		readonly solver: Solver,
		readonly draft: Draft,
		releases: SharedReleases,
	) {
		const asked = new Set(releases.others.flatMap(({ quantities }) => quantities));
		const added = draft.table.quantities.filter(({ key, overlapsOver }) => asked.has(key) && !overlapsOver);
		this.#joint = added.map((quantity) => new JointTables({ ...draft, quantity }, releases));
	}

	audit(withheld: ReadonlySet<number>): OthersFound {
		const found = this.#joint.map((joint) => this.#narrow(joint, withheld));
		return {
			failures: found.flatMap(({ narrow, quantity }) =>
				narrow.map(({ cellKey }): AuditFailure => ({ cellKey, quantity, kind: "by_other_survey" })),
			),
			tried: found.reduce((sum, { tried }) => sum + tried, 0),
			runs: found.reduce((sum, { runs }) => sum + runs, 0),
		};
	}

	/** Cells to withhold besides, so that everything the audit found has its room; fewer where nothing gives it. */
	mend(withheld: ReadonlySet<number>): Set<number> {
		const more = new Set<number>();
		for (const joint of this.#joint) {
			const { narrow } = this.#narrow(joint, new Set([...withheld, ...more]));
			if (narrow.length > 0) this.#widen(joint, narrow, withheld, more);
		}
		return more;
	}

	/** Who is found too closely, with levels as far as they can be kept. */
	#narrow(joint: JointTables, withheld: ReadonlySet<number>) {
		const system = joint.system((cell) => !withheld.has(cell), this.draft.told);
		const aims = aimsOf(joint, system);
		// Blocks of the draft's own lines alone are audited already.
		const blocks = blocksOf(system.unknowns, system.relations).filter((block) =>
			block.unknowns.some((unknown) => system.elsewhere.has(unknown)),
		);
		const { rooms, tried, runs } = this.#roomsOf(system, blocks, aims);
		const { key: quantity } = joint.tables[0]!.quantity;
		const isShort = ({ unknown }: Aim) => (rooms.get(unknown) ?? Infinity) < 1 - ROUNDING;
		const known = aims.filter((aim) => !isShort(aim));
		const owned = this.#foundByOwners(joint, system, blocks, known);
		const short = [...aims.filter(isShort), ...owned.found];
		if (short.length === 0) return { quantity, narrow: [], tried: tried + owned.tried, runs: runs + owned.runs };
		const open = joint.system(() => false, this.draft.told);
		const openBlocks = blocksOf(open.unknowns, open.relations);
		const same = short.map((aim) => {
			const [table, cell] = system.sources[aim.unknown]!;
			return { ...aim, unknown: open.unknownOf(table, cell)! };
		});
		const before = this.#roomsOf(open, openBlocks, same);
		const byOwners = same.filter(({ objectors }) => objectors);
		const standing = new Set(
			this.#foundByOwners(joint, open, openBlocks, byOwners).found.map(({ unknown }) => unknown),
		);
		const narrow = short.flatMap((aim, at): Aim[] => {
			const as = same[at]!;
			if (aim.objectors) return standing.has(as.unknown) ? [] : [as];
			const left = Math.min(1, LEFT * (before.rooms.get(as.unknown) ?? Infinity));
			if (left < STILL || rooms.get(aim.unknown)! >= left * (1 - ROUNDING)) return [];
			return [{ ...as, up: aim.up * left, down: aim.down * left }];
		});
		return { quantity, narrow, tried: tried + owned.tried, runs: runs + before.runs + owned.runs };
	}

	/** Aims that some owner finds too closely by what the own answers tell. */
	#foundByOwners(joint: JointTables, { sources }: JointSystem, blocks: readonly AuditBlock[], aims: readonly Aim[]) {
		if (!this.draft.ownersAttack || aims.length === 0) return { found: [], tried: 0, runs: 0 };
		const found = blocks.map((block) =>
			tryOwners(this.solver, block, aims, (unknown) => joint.partsAt(...sources[unknown]!)),
		);
		return {
			found: found.flatMap(({ failed, objectors }) =>
				aims.filter(({ unknown }) => failed.includes(unknown)).map((aim): Aim => ({ ...aim, objectors })),
			),
			tried: found.reduce((sum, one) => sum + one.tried, 0),
			runs: found.reduce((sum, one) => sum + one.runs, 0),
		};
	}

	/** How much room each aim has, in multiples of what is asked. */
	#roomsOf({ unknowns }: JointSystem, blocks: readonly AuditBlock[], aims: readonly Aim[]) {
		const wanted = new Set(aims.map(({ unknown }) => unknown));
		const searched = blocks
			.filter((block) => block.unknowns.some((unknown) => wanted.has(unknown)))
			.map((block) => intervalsOf(this.solver, block, wanted));
		const intervals = new Map(searched.flatMap((one) => [...one.intervals]));
		const rooms = new Map<number, number>();
		for (const aim of aims) {
			const interval = intervals.get(aim.unknown);
			if (interval) rooms.set(aim.unknown, roomOf(interval, { ...aim, ...unknowns[aim.unknown]! }));
		}
		return { rooms, tried: rooms.size, runs: searched.reduce((sum, { runs }) => sum + runs, 0) };
	}

	/** The cheapest way to each aim's level, on which cells that are shown cost what withholding them loses. */
	#widen(joint: JointTables, narrow: readonly Aim[], withheld: ReadonlySet<number>, more: Set<number>) {
		const { unknowns, relations, sources } = joint.system(() => false, this.draft.told);
		const dearest = Math.max(...this.draft.loss);
		const shownCell = (unknown: number) => {
			const [table, cell] = sources[unknown]!;
			return table === 0 && !withheld.has(cell) && !more.has(cell) ? cell : undefined;
		};
		for (const block of blocksOf(unknowns, relations)) {
			const aims = narrow.filter(({ unknown }) => block.unknowns.includes(unknown));
			if (aims.length === 0) continue;
			const costs = block.unknowns.map((unknown) => {
				const cell = shownCell(unknown);
				return cell === undefined ? 0 : (DEAREST * this.draft.loss[cell]!) / dearest;
			});
			const parts = block.unknowns.map((unknown): readonly KnownPart[] => joint.partsAt(...sources[unknown]!));
			const holds = holdsByOwner(block, parts);
			const search = new PointSearch(this.solver, block, costs);
			const withhold = (column: number) => {
				const cell = shownCell(block.unknowns[column]!);
				if (cell === undefined) return;
				more.add(cell);
				search.cheapen(column);
			};
			try {
				for (const { unknown, up, down, objectors = [] } of aims) {
					const place = block.unknowns.indexOf(unknown);
					for (const side of [up, -down].filter((one) => one !== 0)) {
						for (const owner of [undefined, ...objectors]) {
							const part = parts[place]!.find((one) => one.owner === owner);
							if (part && (part.alone || side < 0)) continue;
							const known = owner === undefined ? [] : holds.get(owner);
							const point = search.reach(place, side * MARGIN, known) ?? [];
							point.forEach((distance, column) => {
								if (Math.abs(distance) > STILL * block.scale) withhold(column);
							});
						}
					}
				}
			} finally {
				search.dispose();
			}
		}
	}
}

/** Every cell that a table of these withholds for its own sake, with the widest level that is asked of it. */
function aimsOf(joint: JointTables, system: JointSystem): Aim[] {
	const aims = new Map<number, Aim>();
	joint.tables.forEach(({ table, quantity, own }, t) => {
		for (const { index, levels } of own) {
			const level = levels[quantity.key] ?? 0;
			const unknown = system.unknownOf(t, index);
			if (level === 0 || unknown === undefined || (aims.get(unknown)?.up ?? 0) >= level) continue;
			const down = Math.min(level, table.cells[index]!.quantities[quantity.key]!.total);
			aims.set(unknown, { cellKey: table.cells[index]!.key, unknown, up: level, down });
		}
	});
	return [...aims.values()];
}

/** The audit of a draft with what was found beside other surveys' releases. */
export function withOthers(audit: AuditResult, { failures, tried, runs }: OthersFound): AuditResult {
	return {
		...audit,
		passed: audit.passed && failures.length === 0,
		failures: [...audit.failures, ...failures],
		linearPrograms: audit.linearPrograms + runs,
		attackers: [...audit.attackers, { kind: "other_survey", tried, failed: failures.length }],
	};
}

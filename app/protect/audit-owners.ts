import { type Hold, PointSearch } from "./audit-search.ts";
import type { AuditBlock } from "./audit-system.ts";
import type { Solver } from "./solver.ts";

/** An unknown that must stay uncertain, and by how much to each side. */
export interface Target {
	unknown: number;
	up: number;
	down: number;
}

/** What an owner knows of an unknown: that it is not less than the own part, or, being alone in it, its value. */
export interface KnownPart {
	owner: string;
	amount: number;
	alone: boolean;
}

export interface OwnersFound {
	/** Unknowns that some owner finds too closely. */
	failed: number[];
	/** Those owners. */
	objectors: string[];
	/** How many times an owner's knowledge was tried. */
	tried: number;
	runs: number;
}

/** Below this share of the mean value a distance is rounding. */
const STILL = 1e-8;

/**
 * Tries the targets of one block against every owner's own knowledge. For each side of a target a point at its level is
 * sought that fits all that is shown; only an owner who knows better of some unknown on the way there could object, and for
 * each such owner a point is sought that this one cannot tell from the truth. An unknown that its own single owner knows is
 * not protected from that owner. Where the owner has a part in the target, only the upper side is asked: the level counts
 * that owner's part as known already.
 * @param partsOf who knows what of an unknown, the largest part first.
 */
export function tryOwners(
	solver: Solver,
	block: AuditBlock,
	targets: readonly Target[],
	partsOf: (unknown: number) => readonly KnownPart[],
): OwnersFound {
	const column = new Map(block.unknowns.map((unknown, place) => [unknown, place]));
	const parts = block.unknowns.map(partsOf);
	const here = targets.filter(({ unknown }) => column.has(unknown));
	const found: OwnersFound = { failed: [], objectors: [], tried: 0, runs: 0 };
	// Where nothing ties an unknown to others, knowing others does not help.
	if (block.rows.length === 0 || here.length === 0 || parts.every((list) => list.length === 0)) return found;
	const search = new PointSearch(solver, block);
	const knows = holdsByOwner(block, parts);
	const objectors = new Set<string>();
	const safe = (place: number, distance: number): boolean => {
		const point = search.reach(place, distance);
		if (!point) return true; // the intervals tell of that
		const own = new Map(parts[place]!.map((part) => [part.owner, part]));
		const against = [...objecting(block, parts, point)].filter((owner) => {
			const part = own.get(owner);
			if (part && (part.alone || distance < 0)) return false;
			found.tried += 1;
			return search.reach(place, distance, knows.get(owner)) === null;
		});
		for (const owner of against) objectors.add(owner);
		return against.length === 0;
	};
	try {
		for (const { unknown, up, down } of here) {
			const place = column.get(unknown)!;
			const sides = [up, -down].filter((side) => side !== 0);
			// Each side is tried, so that all who object are known at once.
			if (sides.map((side) => safe(place, side)).includes(false)) found.failed.push(unknown);
		}
		return { ...found, objectors: [...objectors], runs: search.runs };
	} finally {
		search.dispose();
	}
}

/** Owners who know that this point is not the truth. */
function objecting(block: AuditBlock, parts: readonly (readonly KnownPart[])[], point: readonly number[]): Set<string> {
	const owners = new Set<string>();
	point.forEach((distance, place) => {
		if (Math.abs(distance) <= STILL * block.scale) return;
		const seems = block.values[place]! + distance;
		for (const { owner, amount, alone } of parts[place]!) {
			if (alone || amount > seems + STILL * block.scale) owners.add(owner);
			else break; // the largest part comes first
		}
	});
	return owners;
}

/** By owner, all that the own answers tell of a block's columns. */
export function holdsByOwner(block: AuditBlock, parts: readonly (readonly KnownPart[])[]): Map<string, Hold[]> {
	const holds = new Map<string, Hold[]>();
	parts.forEach((list, column) => {
		for (const { owner, amount, alone } of list) {
			const hold = { column, below: alone ? 0 : Math.max(0, block.values[column]! - amount), exact: alone };
			const known = holds.get(owner);
			if (known) known.push(hold);
			else holds.set(owner, [hold]);
		}
	});
	return holds;
}

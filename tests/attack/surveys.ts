import type { Highs } from "highs";
import type { ProtectionRules } from "#app/protect/rules.ts";
import {
	Attack,
	allKeys,
	cellAims,
	leavesOf,
	nameIn,
	round,
	type Seen,
	sumOf,
	type Told,
	valueOf,
} from "./attacker.ts";
import { crops, type Farm, madeFarms, type Random } from "./farms.ts";

/** The same growers asked again in the season: most answer, some tell other trees, some answer for the first time. */
export function askedAgain(random: Random, farms: readonly Farm[]): Farm[] {
	const silent = [0, 0.1, 0.4][Math.floor(random() * 3)]!;
	const answered = farms.filter(() => random() >= silent);
	const told = answered.map((farm) => (random() < 0.05 ? { ...farm, trees: doubled(farm.trees) } : farm));
	const next = Math.max(...farms.map(({ operation }) => operation)) + 1;
	return [...told, ...madeFarms(random, Math.round(farms.length * silent), next)];
}

const doubled = (trees: Farm["trees"]) =>
	Object.fromEntries(crops.filter((c) => c in trees).map((c) => [c, 2 * trees[c]!]));

/**
 * Tries every withheld cell of two surveys of a season with both releases: as who takes for equal what nobody answered
 * otherwise, and as who also knows what fewer than k owners did. What is found without the second release is not its doing.
 */
export function attackSurveys(
	highs: Highs,
	[first, second]: readonly [Seen, Seen],
	rules: ProtectionRules,
): { broken: Told[]; attacks: number } {
	const broken: Told[] = [];
	let attacks = 0;
	const seen = [first, second];
	const nothing = { ...second, shown: new Set<string>() };
	for (const [attacker, most] of [
		["who keeps both", 0],
		["who knows what few answered otherwise", rules.minimumOwners - 1],
	] as const) {
		const alike = sameValues(seen, most);
		const both = new Attack(highs, [...rowsOf(first, 0), ...rowsOf(second, 1), ...alike]);
		const before = new Attack(highs, [...rowsOf(first, 0), ...rowsOf(nothing, 1), ...alike]);
		const sides = ["Maximize", "Minimize"] as const;
		for (const [e, { cells, shown }] of seen.entries()) {
			for (const aim of cellAims(cells, shown, "trees", rules, nameIn(e))) {
				if (!both.finds(aim, [], sides) || before.finds(aim, [], sides)) continue;
				broken.push({ key: `${e + 1}: ${aim.key}`, quantity: "trees", attacker });
			}
		}
		attacks += both.attacks;
	}
	return { broken, attacks };
}

function rowsOf({ cells, shown }: Seen, e: number): string[] {
	return allKeys
		.filter((key) => shown.has(key) || !cells.has(key))
		.map((key) => `${sumOf(leavesOf(key).map(nameIn(e)))} = ${round(valueOf(cells, key, "trees"))}`);
}

/** Sums that are the same in both but for what at most so many owners answered otherwise, which is then known. */
function sameValues([first, second]: readonly Seen[], most: number): string[] {
	return allKeys.flatMap((key) => {
		const [was, is] = [first!.cells.get(key), second!.cells.get(key)];
		const owners = new Set([...(was?.keys() ?? []), ...(is?.keys() ?? [])]);
		const differing = [...owners].filter((owner) => was?.get(owner)?.trees !== is?.get(owner)?.trees);
		if (!was || !is || differing.length > most) return [];
		const by = valueOf(second!.cells, key, "trees") - valueOf(first!.cells, key, "trees");
		const leaves = leavesOf(key);
		return [`${sumOf(leaves.map(nameIn(1)))} ${leaves.map((leaf) => `- ${nameIn(0)(leaf)}`).join(" ")} = ${round(by)}`];
	});
}

/** Cells that both show, though one owner or two make the difference. */
export function tellingDifferences([first, second]: readonly [Seen, Seen]): string[] {
	return [...second.shown].filter((key) => {
		const [was, is] = [first.cells.get(key), second.cells.get(key)];
		if (!was || !is || !first.shown.has(key)) return false;
		const owners = [...new Set([...was.keys(), ...is.keys()])];
		const differing = owners.filter((owner) => (was.get(owner)?.trees ?? 0) !== (is.get(owner)?.trees ?? 0));
		return differing.length === 1 || differing.length === 2;
	});
}

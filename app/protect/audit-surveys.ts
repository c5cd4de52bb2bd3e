import { type AuditEdition, cellOf, findBesideEditions, type GuardedDifference } from "./audit-editions.ts";
import type { AuditFailure, AuditResult } from "./audit.ts";
import type { Holding } from "./holdings.ts";
import { tableOfHoldings } from "./holdings-table.ts";
import { ownCells } from "./levels.ts";
import { differencesBetween, type OtherSurvey, type SurveyDifference } from "./other-surveys.ts";
import { partsOf } from "./parts.ts";
import type { Edition } from "./revision.ts";
import type { ProtectionRules } from "./rules.ts";
import type { Solver } from "./solver.ts";

export interface SurveysInput extends Pick<OtherSurvey, "areas" | "cropKeys" | "quantities"> {
	rules: ProtectionRules;
	holdings: readonly Holding[];
	/** Earlier releases of the draft's own survey. */
	earlier: readonly Edition[];
	others: readonly OtherSurvey[];
}

export interface SurveysAudit {
	tried: number;
	failures: AuditFailure[];
	linearPrograms: number;
}

/**
 * Audits a draft together with the releases of other surveys of the season, quantity by quantity, as `OtherSurvey` says what
 * may be made of them. Two attackers keep them all. One takes for equal only what nobody answered otherwise, and looks for
 * withheld cells of every release, as does each owner with the own answers. The other also knows what fewer than k owners
 * answered otherwise, and looks for every withheld cell of which that leaves anything to find. Differences of cells that both
 * releases show must not tell of one or two owners.
 * What either finds though the draft told nothing at all is not the draft's doing, and does not count.
 * Not covered: a withheld cell of another survey is taken to ask for what its owners' answers to these quantities ask for,
 * not for what a sensitive question of its own would; differences that no single cell of both releases tells; rounding and
 * weights, which only blur what is shown.
 */
export class SurveysAuditor {
	readonly #made: Map<string, { edition: AuditEdition; from: OtherSurvey }>;
	readonly #quantities: readonly string[];
	/** By quantity and attacker, cells that are found anyway; made when something is found at all. */
	readonly #anyway = new Map<string, Map<string, boolean>>();
	/** By quantity and attacker, cells that were kept while `#shown` was shown. */
	readonly #safe = new Map<string, ReadonlySet<string>>();
	#shown: ReadonlySet<string> | null = null;
	readonly #differences = new Map<string, (cellKey: string) => SurveyDifference>();

	constructor(
		readonly solver: Solver,
		readonly input: SurveysInput,
	) {
		const { areas, cropKeys, quantities, rules, earlier, others, holdings } = input;
		const own = (edition: Edition): OtherSurvey => ({
			...edition,
			areas,
			cropKeys,
			quantities,
			rules,
			shared: quantities,
		});
		const draft = own({ name: "draft", shown: new Set(), holdings });
		this.#quantities = quantities.filter((quantity) => others.some(({ shared }) => shared.includes(quantity)));
		this.#made = new Map(
			[...others, ...earlier.map(own), draft].map((from) => {
				const table = tableOfHoldings(from);
				const { shown } = from;
				return [
					from.name,
					{ from, edition: { table, shown, own: ownCells(table, from.rules), parts: partsOf(table) } },
				];
			}),
		);
	}

	/**
	 * @param shown keys of the cells that the draft would show.
	 * @param again for the last time, sparing nothing: else a cell that was kept while more was shown is not looked for again.
	 */
	audit(shown: ReadonlySet<string>, again = false): SurveysAudit {
		if (again || ![...shown].every((key) => this.#shown?.has(key))) this.#safe.clear();
		this.#shown = shown;
		const failures: AuditFailure[] = [];
		let [tried, linearPrograms] = [0, 0];
		for (const quantity of this.#quantities) {
			for (const knowing of [false, true]) {
				const name = `${quantity} ${knowing}`;
				const spared = this.#safe.get(name) ?? new Set<string>();
				const found = this.#find(quantity, knowing, shown, spared);
				this.#safe.set(name, new Set([...spared, ...found.safe]));
				tried += found.tried;
				linearPrograms += found.runs;
				const anyway = this.#foundAnyway(quantity, knowing, found.failed);
				const cells = new Set(found.failed.filter((one) => !anyway.has(one)).map(cellOf));
				failures.push(...[...cells].map((cellKey): AuditFailure => ({ cellKey, quantity, kind: "by_survey" })));
			}
		}
		return { tried, failures, linearPrograms };
	}

	/** Of these cells, those that are found though the draft shows nothing. */
	#foundAnyway(quantity: string, knowing: boolean, cells: readonly string[]): ReadonlySet<string> {
		const name = `${quantity} ${knowing}`;
		const sofar = this.#anyway.get(name) ?? new Map<string, boolean>();
		this.#anyway.set(name, sofar);
		const asked = new Set(cells.filter((cell) => !sofar.has(cell)));
		if (asked.size > 0) {
			const all = [...this.#made.values()].flatMap(({ edition }, e) =>
				edition.table.cells.map(({ key }) => `${e} ${key}`),
			);
			const spared = new Set(all.filter((cell) => !asked.has(cell)));
			const found = new Set(this.#find(quantity, knowing, new Set(), spared).failed);
			for (const cell of asked) sofar.set(cell, found.has(cell));
		}
		return new Set(cells.filter((cell) => sofar.get(cell)));
	}

	#find(quantity: string, knowing: boolean, shown: ReadonlySet<string>, spared: ReadonlySet<string>) {
		const made = [...this.#made.values()].filter(({ from }) => from.shared.includes(quantity));
		const editions = made.map(({ edition, from }) => (from.name === "draft" ? { ...edition, shown } : edition));
		const between = (later: number, earlier: number) => this.#between(quantity, made[earlier]!.from, made[later]!.from);
		const living = editions.map(
			({ table }) => new Set(table.cells.flatMap(({ key, owners }) => (owners > 0 ? [key] : []))),
		);
		const sameAs = (e: number, key: string): number => {
			const first = made.findIndex((_, before) => {
				if (before >= e || !living[before]!.has(key) || !living[e]!.has(key)) return false;
				const { changes, known } = between(e, before)(key);
				return knowing ? known : changes.length === 0;
			});
			return first === -1 ? e : sameAs(first, key);
		};
		const later = editions.length - 1;
		const differences = made.slice(0, -1).flatMap(({ from }, earlier): GuardedDifference[] => {
			if (knowing || !this.input.others.includes(from)) return [];
			const difference = between(later, earlier);
			// Both tell the cell, so that no program is needed to find the difference.
			const both = [...shown].filter((key) => from.shown.has(key) && difference(key).tells);
			return both.map((cellKey) => ({ cellKey, earlier, later, level: 0, owners: [] }));
		});
		return findBesideEditions(this.solver, { quantity, editions, sameAs, differences, owners: !knowing, spared });
	}

	#between(quantity: string, there: OtherSurvey, here: OtherSurvey): (cellKey: string) => SurveyDifference {
		const name = `${quantity} ${there.name} ${here.name}`;
		const known = this.#differences.get(name) ?? differencesBetween(there, here, quantity, this.input.rules);
		this.#differences.set(name, known);
		return known;
	}
}

/** The audit of a draft with what was found beside other surveys. */
export function withSurveys(audit: AuditResult, found: SurveysAudit): AuditResult {
	return {
		...audit,
		passed: audit.passed && found.failures.length === 0,
		failures: [...audit.failures, ...found.failures],
		linearPrograms: audit.linearPrograms + found.linearPrograms,
		attackers: [...audit.attackers, { kind: "survey", tried: found.tried, failed: found.failures.length }],
	};
}

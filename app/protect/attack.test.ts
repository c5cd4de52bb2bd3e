// An attacker who shares no code with the stage: knows only what is published and the own answers, thinks in the smallest
// cells, writes each program as text, and asks how far each withheld cell can be narrowed down.
import loadHighs from "highs";
import { expect, test } from "vitest";
import { auditRevision } from "./audit-revision.ts";
import { attackBeside, attackEditions, attackTable, type Told } from "#tests/attack/attacker.ts";
import { countCells, type Farm, madeFarms, mended, type Random, randomFrom, shuffled } from "#tests/attack/farms.ts";
import { areaList, crops, holdingsOf, tableOf } from "#tests/attack/tables.ts";
import type { Holding } from "./holdings.ts";
import { protect, type ProtectionRules } from "./protect.ts";
import { type Edition, guardRevision } from "./revision.ts";
import { type SharedCells, sharedCells } from "./shared-cells.ts";
import { loadSolver } from "./solver.ts";

const highs = await loadHighs();
/** No search for the least loss: what is tried here is whether shields hold, not how few they are. */
const quick = { rounds: 0, masters: 0, nodes: 0, linearPrograms: 0 };
const searching = { rounds: 20, masters: 5, nodes: 200, linearPrograms: 1000 };
const told = ({ key, quantity, attacker }: Told) => `${key} ${quantity} by ${attacker}`;

function rulesFrom(random: Random): ProtectionRules {
	return {
		minimumOwners: random() < 0.5 ? 3 : 5,
		dominancePercent: 10,
		largest: random() < 0.2 ? { owners: 2, percent: 85 } : null,
	};
}

test("500 tables: nobody narrows a withheld cell down, nor any owner, nor those of one line together", async () => {
	const random = randomFrom(20_260_412);
	const broken: string[] = [];
	let tried = 0;
	let attacks = 0;
	for (let number = 0; number < 500; number++) {
		const farms = madeFarms(random, 3 + Math.floor(random() * (number % 10 === 0 ? 30 : 10)));
		const rules = rulesFrom(random);
		const quantities = number % 10 === 0 ? (["trees", "lb"] as const) : (["lb"] as const);
		const { pattern, audit } = await protect(tableOf(farms, quantities, rules), rules, {
			limits: number % 50 === 0 ? searching : quick,
		});
		expect(audit.failures, `table ${number}`).toEqual([]);
		const shown = new Set([...pattern].filter(([, { status }]) => status !== "withheld").map(([key]) => key));
		const found = attackTable(highs, countCells(farms), shown, quantities, rules, { owners: number % 5 === 0 });
		tried += 1;
		attacks += found.attacks;
		broken.push(...found.broken.map((one) => `table ${number}: ${told(one)}`));
	}
	expect({ tried, broken }).toEqual({ tried: 500, broken: [] });
	expect(attacks).toBeGreaterThan(10_000);
}, 300_000);

test("50 sequences of revisions: nobody who keeps every release finds a withheld cell or a change of too few", async () => {
	const random = randomFrom(20_260_413);
	const solver = await loadSolver();
	const broken: string[] = [];
	const counted = { tried: 0, published: 0, waiting: 0 };
	for (let number = 0; number < 50; number++) {
		const rules = rulesFrom(random);
		let farms: Farm[] = madeFarms(random, 6 + Math.floor(random() * 10));
		const editions: { farms: Farm[]; edition: Edition }[] = [];
		for (let step = 0; step < 3; step++) {
			if (step > 0) farms = mended(random, farms);
			const holdings = holdingsOf(farms, ["lb"]);
			const earlier = editions.map(({ edition }) => edition);
			const guard = guardRevision({ areas: areaList, quantities: ["lb"], rules, earlier, holdings });
			const { pattern, audit } = await protect(tableOf(farms, ["lb"], rules), rules, { guard, limits: quick });
			const shown = new Set([...pattern].filter(([, { status }]) => status === "shown").map(([key]) => key));
			const revision = auditRevision(solver, {
				areas: areaList,
				cropKeys: crops,
				quantities: ["lb"],
				rules,
				earlier,
				draft: { shown, holdings },
			});
			// What does not pass waits, and nobody sees it.
			if (audit.passed && revision.passed) editions.push({ farms, edition: { name: String(step), shown, holdings } });
			counted[audit.passed && revision.passed ? "published" : "waiting"] += 1;
		}
		counted.tried += 1;
		const found = attackEditions(
			highs,
			editions.map(({ farms: of, edition: { shown } }) => ({ cells: countCells(of), shown })),
			rules,
		);
		broken.push(...found.map((one) => `sequence ${number}: ${told(one)}`));
	}
	expect({ tried: counted.tried, broken }).toEqual({ tried: 50, broken: [] });
	// Mostly there is something to publish, or nothing would have been tried.
	expect(counted.published).toBeGreaterThan(80);
}, 300_000);

/** Some counties tell more the second time, with growers who did not answer the first; in the others all is the same. */
const fullerIn = (count: number) => (random: Random, first: readonly Farm[]) => {
	const more = new Set(shuffled(random, ["c1", "c2", "c3", "c4", "c5"]).slice(0, count));
	return [...first, ...madeFarms(random, 12, 100).filter(({ county }) => more.has(county))];
};

/** The second survey's release beside that of a first one, as it is held against it. */
async function pairOf(random: Random, first: readonly Farm[], second: readonly Farm[], owners: boolean) {
	const rules = rulesFrom(random);
	let blocked = 0;
	const showing = async (farms: readonly Farm[], shared?: SharedCells) => {
		const table = tableOf(farms, ["trees"], rules);
		const { pattern, audit } = await protect(table, rules, { limits: quick, ...(shared && { shared }) });
		if (!audit.passed) blocked += 1;
		return new Set([...pattern].filter(([, { status }]) => status === "shown").map(([key]) => key));
	};
	const shown = await showing(first);
	const [there, here] = [first, second].map((farms) => holdingsOf(farms, ["trees"])) as [Holding[], Holding[]];
	const other = { name: "1", shown, holdings: there, quantities: ["trees"] };
	const shared = sharedCells({ areas: areaList, rules, holdings: here, others: [other] });
	const attack = (seen: ReadonlySet<string>) => {
		const both = { there: { cells: countCells(first), shown }, here: { cells: countCells(second), shown: seen } };
		return attackBeside(highs, both, "trees", rules, { owners });
	};
	const found = attack(await showing(second, shared));
	return {
		...found,
		blocked,
		byCellsAlone: async () => attack(await showing(second, { ...shared, releases: undefined })).broken.length,
	};
}

test.each([
	{ name: "one county tells more", next: fullerIn(1), seed: 77_000, linesTell: true },
	{ name: "two counties tell more", next: fullerIn(2), seed: 77_100 },
	{ name: "answers come, go and change anywhere", next: mended, seed: 77_200 },
])(
	"50 pairs of surveys of the same growers, where $name: the second release brings nobody nearer",
	async (pairs) => {
		const counted = { tried: 0, blocked: 0, broken: [] as string[], brokenByCellsAlone: 0 };
		for (let number = 0; number < 50; number++) {
			const random = randomFrom(pairs.seed + number);
			const first = madeFarms(random, 8 + Math.floor(random() * 24));
			const pair = await pairOf(random, first, pairs.next(random, first), number % 5 === 0);
			counted.tried += pair.tried;
			counted.blocked += pair.blocked;
			counted.broken.push(...pair.broken.map((one) => `pair ${number}: ${told(one)}`));
			if (pairs.linesTell && number % 2 === 0) counted.brokenByCellsAlone += await pair.byCellsAlone();
		}
		expect(counted).toMatchObject({ broken: [], blocked: 0 });
		expect(counted.tried).toBeGreaterThan(300);
		// The same attacker finds something where only cells are taken over, and no lines.
		if (pairs.linesTell) expect(counted.brokenByCellsAlone).toBeGreaterThan(0);
	},
	300_000,
);

test("the same attacker finds what a table gives away whose shields are shown", () => {
	const random = randomFrom(20_260_415);
	const rules = { minimumOwners: 5, dominancePercent: 10 };
	let found = 0;
	for (let number = 0; number < 20; number++) {
		const cells = countCells(madeFarms(random, 30));
		const shown = new Set([...cells].filter(([, owners]) => owners.size >= 5).map(([key]) => key));
		if (attackTable(highs, cells, shown, ["lb"], rules, { owners: true }).broken.length > 0) found += 1;
	}
	expect(found).toBeGreaterThan(15);
});

test("the same attacker finds one late answer by subtraction, where two releases show every county", () => {
	const farms = madeFarms(randomFrom(20_260_416), 60);
	const late = { operation: 99, owner: 99, county: "c1", trees: { apple: 500 }, lost: 0 };
	const editions = [farms, [...farms, late]].map((list) => {
		const cells = countCells(list);
		return { cells, shown: new Set(cells.keys()) };
	});
	const found = attackEditions(highs, editions, { minimumOwners: 3, dominancePercent: 10 });
	expect(found.map(({ key }) => key)).toContain("change of c1|apple");
});

test("the same answers in another order give the same pattern", async () => {
	const random = randomFrom(20_260_414);
	const rules = { minimumOwners: 5, dominancePercent: 10 };
	for (let number = 0; number < 5; number++) {
		const farms = madeFarms(random, 20);
		const first = await protect(tableOf(farms, ["lb"], rules), rules);
		const second = await protect(tableOf(shuffled(random, farms), ["lb"], rules), rules);
		expect([...second.pattern]).toEqual([...first.pattern]);
	}
}, 60_000);

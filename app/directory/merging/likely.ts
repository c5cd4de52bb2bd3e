import { likeness, plainText } from "#app/lib/closeness.ts";

export type Candidate = {
	operationId: string;
	name: string;
	contactName: string;
	email: string | null;
	phone: string | null;
	countyFips: string;
};
export type Sign = "email" | "phone" | "name" | "contact";
export type Pair = { a: string; b: string; signs: Sign[]; score: number };

/** Words of the trade that half of all names have, so that they tell none apart. */
const common = new Set(
	"orchard orchards farm farms fruit fruits family the and of llc inc co company brothers sons finca huerto huerta rancho la el los las de y".split(
		" ",
	),
);
const weights: Record<Sign, number> = { email: 4, phone: 3, name: 3, contact: 2 };
/** The same address alone is enough; a name needs the same county, and a contact something beside it. */
const enough = 3;
const alike = 0.8;
/** Where so many share a word it says nothing, and comparing them all would take long. */
const mostSharing = 200;

const tellingName = (name: string) =>
	plainText(name)
		.split(" ")
		.filter((word) => !common.has(word))
		.join(" ") || plainText(name);
const digits = (phone: string | null) => (phone ?? "").replace(/\D/g, "").slice(-10);

/**
 * Pairs that are likely one grower written down twice, the likeliest first: the same address or telephone, or in one county
 * a close name. Only those that share an address, a number, a word or its beginning are held against each other.
 */
export function likelyPairs(candidates: readonly Candidate[], apart: ReadonlySet<string> = new Set()): Pair[] {
	const blocks = new Map<string, number[]>();
	const put = (key: string, index: number) => blocks.set(key, [...(blocks.get(key) ?? []), index]);
	const read = candidates.map((row) => ({ ...row, plain: tellingName(row.name), digits: digits(row.phone) }));
	for (const [index, row] of read.entries()) {
		if (row.email) put(`@${row.email.toLowerCase()}`, index);
		if (row.digits.length >= 7) put(`#${row.digits}`, index);
		for (const word of new Set(row.plain.split(" "))) put(`${row.countyFips} ${word.slice(0, 3)}`, index);
	}
	const pairs = new Map<string, Pair>();
	for (const members of blocks.values()) {
		if (members.length > mostSharing) continue;
		for (const [at, first] of members.entries())
			for (const second of members.slice(at + 1)) {
				const [a, b] = [read[first]!, read[second]!].toSorted((x, y) => (x.operationId < y.operationId ? -1 : 1));
				const key = pairKey(a!.operationId, b!.operationId);
				if (a === b || pairs.has(key) || apart.has(key)) continue;
				const signs = signsOf(a!, b!);
				const score = scoreOf(signs);
				if (score >= enough) pairs.set(key, { a: a!.operationId, b: b!.operationId, signs, score });
			}
	}
	return [...pairs.values()].toSorted((x, y) => y.score - x.score || x.a.localeCompare(y.a) || x.b.localeCompare(y.b));
}

/** Those that are likely the same grower as one who is about to be written down, the likeliest first. */
export function likelyTo<T extends Candidate>(one: Omit<Candidate, "operationId">, others: readonly T[]): T[] {
	const read = (row: Candidate): Read => ({ ...row, plain: tellingName(row.name), digits: digits(row.phone) });
	const first = read({ ...one, operationId: "" });
	return others
		.map((other) => ({ other, score: scoreOf(signsOf(first, read(other))) }))
		.filter(({ score }) => score >= enough)
		.toSorted((x, y) => y.score - x.score || x.other.operationId.localeCompare(y.other.operationId))
		.map(({ other }) => other);
}

const scoreOf = (signs: Sign[]) => signs.reduce((sum, sign) => sum + weights[sign], 0);

export const pairKey = (a: string, b: string) => (a < b ? `${a} ${b}` : `${b} ${a}`);

type Read = Candidate & { plain: string; digits: string };

function signsOf(a: Read, b: Read): Sign[] {
	const signs: Sign[] = [];
	if (a.email && a.email.toLowerCase() === b.email?.toLowerCase()) signs.push("email");
	if (a.digits.length >= 7 && a.digits === b.digits) signs.push("phone");
	if (a.countyFips === b.countyFips) {
		if (likeness(a.plain, b.plain) >= alike) signs.push("name");
		if (a.contactName && likeness(plainText(a.contactName), plainText(b.contactName)) >= 0.9) signs.push("contact");
	}
	return signs;
}

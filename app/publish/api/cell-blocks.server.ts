import { KeptBySize } from "#app/lib/kept-by-size.ts";
import { reader } from "../reader.server.ts";
import type { Place } from "./cursor.server.ts";
import { listCellPage, selectCells } from "./list-cells.server.ts";
import type { CellsQuery } from "./parameters.ts";

// Whoever reads a release page by page asks for each row once, so a page's answer is seldom there already. What a page is
// made of is: the rows of one measure as JSON, read and told once in a process. Pages are cut out of that as bytes, which for
// a thousand rows took 1 ms where asking the database and telling the rows took 18. A release never changes; who may have it
// is decided before, at each request.

type Released = { releaseId: string; number: number; season: number };
type Bytes = Uint8Array<ArrayBuffer>;
/** The cells of a release in their order, which is the same for each measure, and where each is. */
type Order = { measures: { key: string; position: number }[]; cells: CellKey[]; at: Map<string, number> };
type CellKey = { cropKey: string; areaKind: string; areaKey: string };
/** One measure's rows as JSON, each with a comma behind it, and where each ends. */
type Block = { bytes: Bytes; ends: Uint32Array };

/** Of a release with more cells a page is asked for by itself: a block would take longer to read than a page saves. */
const mostCells = 20_000;
/** As rows of a large release take some 350 bytes each, blocks of a dozen of its measures. */
const blocks = new KeptBySize<Promise<Block>>({ inAll: 48e6, each: 12e6 });
const orders = new KeptBySize<Promise<Order>>({ inAll: 12, each: 1 });
const roughRow = 350;

/** Rows as JSON in one or several runs with commas between all of them, and the place of the last one where more follow. */
export type JsonPage = { json: Bytes[]; last: Place | null };

/**
 * A page in the same order and with the same rows as `listCellPage`. Null where it has to be asked for by itself: of a few
 * areas or by status, for which reading whole measures would be a waste, and of a very large release.
 */
export async function pageOfBlocks(
	release: Released,
	query: CellsQuery,
	after: Place | null,
): Promise<JsonPage | null> {
	if (query.area || query.kind || query.state || query.status) return null;
	const order = await orderOf(release.releaseId);
	if (order.cells.length > mostCells) return null;
	const { pieces, last } = cut(order, query, after);
	const json = await Promise.all(
		pieces.map(async ({ measure, from, to }, index) => {
			const { bytes, ends } = await blockOf(release, measure, order.cells.length);
			const end = ends[to - 1]!;
			// Without the comma behind the last row of all.
			return bytes.subarray(ends[from - 1] ?? 0, index === pieces.length - 1 ? end - 1 : end);
		}),
	);
	return { json, last };
}

/** Rows of one measure from a cell up to, and without, another. */
type Piece = { measure: string; from: number; to: number };

/** Which rows a page is made of: crop by crop within measure by measure, as their order has it. */
export function cut(
	order: Order,
	query: Pick<CellsQuery, "measure" | "crop" | "limit">,
	after: Place | null,
): { pieces: Piece[]; last: Place | null } {
	const [position, crop, , area] = after ?? [Number.NEGATIVE_INFINITY];
	const pieces: Piece[] = [];
	let left = query.limit;
	let last: Place | null = null;
	for (const measure of order.measures) {
		if (measure.position < Number(position) || (query.measure && !query.measure.includes(measure.key))) continue;
		const begin = measure.position === position ? order.at.get(`${crop} ${area}`)! + 1 : 0;
		for (const range of runsOf(order.cells, query.crop)) {
			const from = Math.max(range.from, begin);
			if (from >= range.to) continue;
			if (left === 0) return { pieces, last };
			const to = Math.min(range.to, from + left);
			left -= to - from;
			pieces.push({ measure: measure.key, from, to });
			const { cropKey, areaKind, areaKey } = order.cells[to - 1]!;
			last = [measure.position, cropKey, areaKind, areaKey];
			if (to < range.to) return { pieces, last };
		}
	}
	return { pieces, last: null };
}

/** Where the cells of these crops lie, or of all: a crop's cells lie together. */
function runsOf(cells: CellKey[], crops: string[] | undefined): { from: number; to: number }[] {
	if (!crops) return [{ from: 0, to: cells.length }];
	const runs: { from: number; to: number }[] = [];
	for (let from = 0; from < cells.length;) {
		const { cropKey } = cells[from]!;
		let to = from;
		while (cells[to]?.cropKey === cropKey) to += 1;
		if (crops.includes(cropKey)) runs.push({ from, to });
		from = to;
	}
	return runs;
}

/** Made once for all who ask meanwhile; what failed is made anew by the next. */
async function keptOnce<T>(
	kept: KeptBySize<Promise<T>>,
	key: string,
	size: number,
	make: () => Promise<T>,
): Promise<T> {
	const known = kept.get(key);
	if (known) return known;
	const made = make();
	kept.keep(key, made, size);
	made.catch(() => kept.drop(key));
	return made;
}

const orderOf = (releaseId: string) =>
	keptOnce(orders, releaseId, 1, async (): Promise<Order> => {
		const [measures, cells] = await Promise.all([
			reader()
				.selectFrom("release.measure")
				.select(["measure_key as key", "position"])
				.where("release_id", "=", releaseId)
				.orderBy("position")
				.execute(),
			selectCells(releaseId, {}, null)
				.limit(mostCells + 1)
				.execute(),
		]);
		const at = new Map(cells.map(({ cropKey, areaKey }, index) => [`${cropKey} ${areaKey}`, index]));
		return { measures, cells: cells.map(({ cropKey, areaKind, areaKey }) => ({ cropKey, areaKind, areaKey })), at };
	});

const blockOf = (release: Released, measure: string, cells: number) =>
	keptOnce(blocks, `${release.releaseId} ${measure}`, cells * roughRow, async (): Promise<Block> => {
		const { rows } = await listCellPage(release, { measure: [measure], limit: cells }, null);
		const texts = rows.map((row) => Buffer.from(`${JSON.stringify(row)},`));
		const ends = new Uint32Array(texts.length);
		let end = 0;
		for (const [index, { length }] of texts.entries()) ends[index] = end += length;
		return { bytes: Buffer.concat(texts), ends };
	});

import { z } from "zod";
import type { DataRecord } from "#app/publish/data-file.ts";
import { apiAddresses } from "#app/publish/tables/api-addresses.ts";
import {
	canBeTold,
	type ReadSelection,
	readSelection,
	statesOf,
	wantedReleases,
	wantsRevisions,
} from "#app/publish/tables/selection.ts";
import { tellChoice } from "#app/publish/tables/tell-table.ts";
import type { TablePage } from "./table-page.ts";

/** What the server told last that a table is made from, and the cells that were fetched last. */
let kept: Pick<TablePage, "catalogue" | "picture" | "approved" | "site"> | undefined;
let fetched: { addresses: string; records: DataRecord[] } | undefined;

/**
 * A choice as the page tells it, with cells out of the data API. The server is asked where the browser does not know enough:
 * at first, for a release or outlines that it has not heard of, and where the API no longer knows what it did.
 */
export async function tableInBrowser(request: Request, serverLoader: () => Promise<TablePage>): Promise<TablePage> {
	const { searchParams } = new URL(request.url);
	const known = kept;
	if (!known || !isTold(known.catalogue, searchParams)) return askServer(serverLoader);
	const read = readSelection(searchParams, known.catalogue);
	const cells = canBeTold(read) ? await cellsOf(known.catalogue, read, request.signal) : null;
	if (cells === "unknown") return askServer(serverLoader);
	const told = tellChoice(known.catalogue, read, cells === "failed" ? null : cells);
	if (told.table?.map && !known.picture) return askServer(serverLoader);
	return { ...known, ...told, state: cells === "failed" ? "failed" : "fetched" };
}

async function askServer(serverLoader: () => Promise<TablePage>): Promise<TablePage> {
	const page = await serverLoader();
	const { catalogue, approved, site } = page;
	// Outlines are those of the network's states, the same for every map.
	const same = kept && `${statesOf(kept.catalogue)}` === `${statesOf(catalogue)}`;
	kept = { catalogue, approved, site, picture: page.picture ?? (same ? kept!.picture : null) };
	return page;
}

/** Whether the catalogue at hand is that of the address: editions that were replaced are in it only if they are asked for. */
const isTold = ({ releases, revisions }: TablePage["catalogue"], search: URLSearchParams): boolean =>
	revisions === wantsRevisions(search) &&
	wantedReleases(search).every((number) => releases.some((release) => release.number === number));

const Answer = z.object({
	data: z.array(z.looseObject({ release: z.int(), measure: z.string(), status: z.string() })),
});

async function cellsOf(
	catalogue: TablePage["catalogue"],
	{ selection }: ReadSelection,
	signal: AbortSignal,
): Promise<DataRecord[] | "failed" | "unknown"> {
	const addresses = apiAddresses(catalogue, selection);
	const key = addresses.join(" ");
	if (fetched?.addresses === key) return fetched.records;
	try {
		const answers = await Promise.all(addresses.map((address) => fetch(address, { signal })));
		// Withdrawn or replaced since the page was opened: the server says what there is now.
		if (answers.some(({ status }) => status >= 400 && status < 429)) return "unknown";
		if (answers.some(({ ok }) => !ok)) return "failed";
		const pages = await Promise.all(answers.map(async (answer) => Answer.parse(await answer.json()).data));
		const records = pages.flat() as unknown as DataRecord[];
		fetched = { addresses: key, records };
		return records;
	} catch (error) {
		if (signal.aborted) throw error;
		return "failed";
	}
}

import type { Kysely } from "kysely";
import { connect } from "#db/connect.ts";
import type { DB } from "#db/schema.ts";
import { env } from "#app/lib/env.server.ts";
import { serviceAway } from "#app/lib/service-away.server.ts";

type ReportTable = "publish.report" | "publish.report_file" | "publish.report_photo";
type ReaderTable = `release.${string}` | ReportTable | "publish.expected";
/** What the reader's role can see: released cells, published reports, and what is expected when. Other tables do not even compile. */
export type ReaderDB = Pick<DB, Extract<keyof DB, ReaderTable>>;

let readerDatabase: Kysely<ReaderDB> | undefined;

/** The connection of public, data-room and comparison pages: role `tallygrove_reader`, which has no right further left. */
export function reader(): Kysely<ReaderDB> {
	readerDatabase ??= connect(env().DATABASE_READER_URL, {
		name: "tallygrove-reader",
		away: serviceAway,
	}) as unknown as Kysely<ReaderDB>;
	return readerDatabase;
}

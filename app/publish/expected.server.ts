import { type Kysely, sql } from "kysely";
import { z } from "zod";
import { Words } from "#app/lib/words.ts";
import { reader, type ReaderDB } from "./reader.server.ts";

const Row = z.object({
	kind: z.enum(["survey_closes", "release", "report"]),
	title: Words,
	season: z.number(),
	expected_at: z.date(),
	again: z.boolean(),
	state_fips: z.array(z.string()),
});

/** Something that has a minute to come: an open survey closes, or approved figures or an approved report come out. */
export type Expected = {
	kind: z.infer<typeof Row>["kind"];
	/** Of the survey that it is about, never a report's own. */
	title: Words;
	season: number;
	/** ISO moment. */
	at: string;
	/** A revision or a correction. */
	again: boolean;
	/** Of a survey: where it is asked. */
	stateFips: string[];
};

/** What is expected, the soonest first. No figure is told, and no word that was written about one. */
export async function listExpected(db: Kysely<ReaderDB> = reader()): Promise<Expected[]> {
	const rows = await db
		.selectFrom("publish.expected")
		.select(["kind", "title", "season", "expected_at", "again", "state_fips"])
		// A minute that has passed is still to come where the queue is late; a survey has closed by then.
		.where((eb) => eb.or([eb("kind", "<>", "survey_closes"), eb("expected_at", ">", sql<Date>`now()`)]))
		.orderBy("expected_at")
		.orderBy("kind")
		.execute();
	return rows.map((row) => {
		const { kind, title, season, expected_at, again, state_fips } = Row.parse(row);
		return { kind, title, season, at: expected_at.toISOString(), again, stateFips: state_fips };
	});
}

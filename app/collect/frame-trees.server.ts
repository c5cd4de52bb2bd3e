import { type QueryCreator, sql } from "kysely";
import type { DB } from "#db/schema.ts";

/** The bearing trees of each operation of a survey's frame, of one crop or of `all`: a part of a query, by its `with`. */
export function treesByOperation(surveyId: string, cropKey: string) {
	return (db: QueryCreator<DB>) =>
		db
			.selectFrom("collect.frame_crop")
			.where("survey_id", "=", surveyId)
			.$if(cropKey !== "all", (rows) => rows.where("crop_key", "=", cropKey))
			.groupBy("operation_id")
			.select(["operation_id", sql<number>`sum(bearing_trees)::float8`.as("bearing_trees")]);
}

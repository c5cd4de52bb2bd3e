import { sql } from "kysely";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Grower } from "#app/auth/viewer.ts";
import type { Words } from "./form.ts";

/** A signed-in grower's operations with what stands in them and the surveys that asked about them, newest first. */
export async function listOrchard(trx: Trx, viewer: Grower) {
	const operations = await trx
		.selectFrom("directory.operation as o")
		.innerJoin("directory.county as c", "c.county_fips", "o.county_fips")
		.innerJoin("directory.state as s", "s.state_fips", "o.state_fips")
		.where("o.operation_id", "in", viewer.operationIds)
		.where("o.status", "=", "active")
		.select([
			"o.operation_id as operationId",
			"o.name",
			"o.contact_name as contactName",
			"o.email",
			"o.phone",
			"c.name as countyName",
			"s.state_fips as stateFips",
		])
		.orderBy("o.name")
		.orderBy("o.operation_id")
		.execute();
	const plantings = await trx
		.selectFrom("directory.planting as p")
		.innerJoin("directory.crop as k", "k.crop_key", "p.crop_key")
		.where("p.operation_id", "in", viewer.operationIds)
		.where("p.removed_on", "is", null)
		.select([
			"p.planting_id as plantingId",
			"p.operation_id as operationId",
			"p.crop_key as cropKey",
			"p.cultivar",
			"p.bearing_trees as bearingTrees",
			"p.planted_year as plantedYear",
		])
		.orderBy("k.position")
		.orderBy("p.cultivar")
		.orderBy("p.planting_id")
		.execute();
	const surveys = await listAsked(trx, viewer);
	return operations.map((operation) => ({
		...operation,
		plantings: plantings.filter(({ operationId }) => operationId === operation.operationId),
		surveys: surveys.filter(({ operationId }) => operationId === operation.operationId),
	}));
}

async function listAsked(trx: Trx, viewer: Grower) {
	const rows = await trx
		.selectFrom("collect.frame_operation as f")
		.innerJoin("collect.survey as s", "s.survey_id", "f.survey_id")
		.innerJoin("directory.state as z", "z.state_fips", "f.state_fips")
		.leftJoin("collect.response as r", (join) =>
			join.onRef("r.survey_id", "=", "f.survey_id").onRef("r.operation_id", "=", "f.operation_id"),
		)
		.where("f.operation_id", "in", viewer.operationIds)
		.where("s.opened_at", "is not", null)
		.select([
			"f.operation_id as operationId",
			"s.survey_id as surveyId",
			"s.season",
			"s.title",
			"s.closes_at as closesAt",
			"z.time_zone as timeZone",
			"r.receipt_code as receiptCode",
			"r.submitted_at as submittedAt",
			"r.late_at as lateAt",
			"r.withdrawn_at as withdrawnAt",
			sql<boolean>`coalesce(r.submitted_version, 0) > 0`.as("everSent"),
			sql<boolean>`r.response_id is not null`.as("begun"),
			sql<boolean>`s.closed_at is null and s.closes_at > now()`.as("isOpen"),
		])
		.orderBy("s.season", "desc")
		.orderBy("s.opened_at", "desc")
		.execute();
	return rows.map((row) => ({ ...row, title: row.title as Words }));
}

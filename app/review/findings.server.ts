import { type RawBuilder, sql } from "kysely";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import type { Answer } from "#app/collect/form.ts";
import { countRows, type Order, pageByKey } from "#app/lib/page-by-key.server.ts";
import type { FindingsQuery } from "./findings.schema.ts";
import type { CheckKind, Odd } from "./odd-answers.ts";
import type { FindingEnd, FindingStep, Moved } from "./save-findings.server.ts";

const pageSize = 50;

export type Finding = Awaited<ReturnType<typeof findFinding>> & {};

/** A page of the queue, findings of equal sort values by id. */
export async function listFindings(trx: Trx, viewer: Associate, surveyId: string, query: FindingsQuery) {
	const matching = matchingFindings(trx, viewer, surveyId, query);
	const count = await countRows(trx, (most) => matching.select(sql.lit(1).as("one")).limit(most));
	const order = orderOf(query);
	const page = await pageByKey(order, query, pageSize, ({ beyond, inOrder, place, limit }) =>
		matching
			.where(beyond)
			.where(sql<boolean>`${order.keys[0]!.by} is not null`)
			.select(["f.edit_finding_id as findingId", place.as("place")])
			.orderBy(inOrder)
			.limit(limit)
			.execute(),
	);
	const ids = page.rows.map(({ findingId }) => findingId);
	const found = await selectFindings(trx, viewer, surveyId)
		.where((eb) => eb("f.edit_finding_id", "=", eb.fn.any(eb.val(ids))))
		.execute();
	const byId = new Map(found.map((finding) => [finding.findingId, finding]));
	return { ...page, ...count, rows: ids.flatMap((id) => byId.get(id) ?? []) };
}

/** @returns undefined outside the viewer's states, for another survey's finding, and where the answers were taken back. */
export async function findFinding(trx: Trx, viewer: Associate, surveyId: string, findingId: string) {
	return selectFindings(trx, viewer, surveyId).where("f.edit_finding_id", "=", findingId).executeTakeFirst();
}

/** How many answers of each survey wait to be checked, in the viewer's states. */
export async function countOpenFindings(trx: Trx, viewer: Associate): Promise<Map<string, number>> {
	const rows = await trx
		.selectFrom("collect.edit_finding as f")
		.where("f.state_fips", "in", viewer.stateFips)
		.where("f.is_sent", "=", true)
		.where("f.outcome", "is", null)
		.groupBy("f.survey_id")
		.select(["f.survey_id", sql<number>`count(*)::int`.as("open")])
		.execute();
	return new Map(rows.map(({ survey_id, open }) => [survey_id, open]));
}

/** What happened to a finding, oldest first. The caller has found it. */
export async function listSteps(trx: Trx, findingId: string) {
	return trx
		.selectFrom("collect.edit_finding_step as s")
		.leftJoin("auth.person as p", "p.person_id", "s.person_id")
		.where("s.edit_finding_id", "=", findingId)
		.orderBy("s.number")
		.select(["s.number", sql<FindingStep>`s.step`.as("step"), "s.words", "s.at", "p.display_name as personName"])
		.execute();
}

/** Whether what was done last about a finding was the viewer's own doing: in another window, where this one knew nothing of it. */
export async function didLastStep(trx: Trx, viewer: Associate, findingId: string): Promise<boolean> {
	const last = await trx
		.selectFrom("collect.edit_finding_step")
		.where("edit_finding_id", "=", findingId)
		.orderBy("number", "desc")
		.limit(1)
		.select("person_id")
		.executeTakeFirst();
	return last?.person_id === viewer.personId;
}

/** The one place that says whose findings an associate can see: of answers that their grower has not taken back. */
function fromFindings(trx: Trx, viewer: Associate, surveyId: string) {
	return trx
		.selectFrom("collect.edit_finding as f")
		.where("f.survey_id", "=", surveyId)
		.where("f.state_fips", "in", viewer.stateFips)
		.where("f.is_sent", "=", true);
}

function selectFindings(trx: Trx, viewer: Associate, surveyId: string) {
	return fromFindings(trx, viewer, surveyId)
		.innerJoin("directory.operation as d", "d.operation_id", "f.operation_id")
		.innerJoin("collect.frame_operation as o", (join) =>
			join.onRef("o.survey_id", "=", "f.survey_id").onRef("o.operation_id", "=", "f.operation_id"),
		)
		.innerJoin("directory.county as c", "c.county_fips", "o.county_fips")
		.innerJoin("directory.state as s", "s.state_fips", "o.state_fips")
		.leftJoin("directory.planting as p", "p.planting_id", "f.planting_id")
		.leftJoin("collect.edit_question as q", "q.edit_finding_id", "f.edit_finding_id")
		.leftJoin("auth.person as b", "b.person_id", "f.closed_by")
		.select([
			"f.edit_finding_id as findingId",
			"f.version",
			"f.survey_id as surveyId",
			"f.response_id as responseId",
			"f.operation_id as operationId",
			"o.state_fips as stateFips",
			"o.county_fips as countyFips",
			"o.stratum_key as stratumKey",
			"c.district_key as districtKey",
			"d.name as operationName",
			"d.contact_name as contactName",
			"d.phone",
			"c.name as countyName",
			"s.postal as statePostal",
			"s.time_zone as timeZone",
			"f.check_key as checkKey",
			"f.question_key as questionKey",
			"f.planting_id as plantingId",
			"f.crop_key as cropKey",
			"p.cultivar",
			"f.effect",
			"f.made_at as madeAt",
			"f.closed_at as closedAt",
			"f.closed_by as closedById",
			"b.display_name as closedBy",
			"q.asked_at as askedAt",
			"q.replied_at as repliedAt",
			sql<CheckKind>`f.check_kind`.as("checkKind"),
			sql<Answer[]>`f.about`.as("about"),
			sql<Odd["told"]>`f.told`.as("told"),
			sql<Moved | null>`f.moved`.as("moved"),
			sql<FindingEnd | null>`f.outcome`.as("outcome"),
			sql<"right" | "wrong" | null>`q.reply`.as("reply"),
		]);
}

function orderOf({ sort, direction }: FindingsQuery): Order {
	const first = {
		// What moves no figure comes last either way.
		effect: { by: sql`coalesce(f.effect, ${direction === "asc" ? "infinity" : "-infinity"})`, kind: "float8" },
		grower: { by: sql.ref("d.name"), kind: "text" },
		county: { by: sql.ref("c.name"), kind: "text" },
		kind: { by: sql.ref("f.check_kind"), kind: "text" },
		made: { by: sql.ref("f.made_at"), kind: "instant" },
	} as const;
	return { keys: [first[sort], { by: sql.ref("f.edit_finding_id"), kind: "uuid" }], direction };
}

const stateConditions: Partial<Record<FindingsQuery["state"], RawBuilder<boolean>>> = {
	asked: sql<boolean>`(q.asked_at is not null and q.reply is null)`,
	said_right: sql<boolean>`q.reply = 'right'`,
	said_wrong: sql<boolean>`q.reply = 'wrong'`,
	confirmed_by_grower: sql<boolean>`coalesce((f.told ->> 'confirmedByGrower')::boolean, false)`,
};

/**
 * What a list is narrowed by and sorted in, and no more: what it tells is read for the rows of a page. The planner leaves out
 * what is joined here and not asked for.
 */
function matchingFindings(trx: Trx, viewer: Associate, surveyId: string, query: FindingsQuery) {
	const { show, kind, crop, area, state } = query;
	const condition = stateConditions[state];
	return fromFindings(trx, viewer, surveyId)
		.leftJoin("directory.operation as d", "d.operation_id", "f.operation_id")
		.leftJoin("collect.frame_operation as o", (join) =>
			join.onRef("o.survey_id", "=", "f.survey_id").onRef("o.operation_id", "=", "f.operation_id"),
		)
		.leftJoin("directory.county as c", "c.county_fips", "o.county_fips")
		.leftJoin("collect.edit_question as q", "q.edit_finding_id", "f.edit_finding_id")
		.where("f.outcome", show === "open" ? "is" : "is not", null)
		.$if(kind !== "all", (some) => some.where("f.check_kind", "=", kind))
		.$if(crop !== "all", (some) => some.where("f.crop_key", "=", crop))
		.$if(area !== "all", (some) =>
			some.where(sql<boolean>`${area} in (o.county_fips, o.state_fips, coalesce(c.district_key, ''))`),
		)
		.$if(condition !== undefined, (some) => some.where(condition!))
		.$if(show === "ended" && state !== "all" && condition === undefined, (some) =>
			some.where(sql<boolean>`f.outcome = ${state}`),
		);
}

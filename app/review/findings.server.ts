import { type ExpressionBuilder, type RawBuilder, sql } from "kysely";
import type { DB } from "#db/schema.ts";
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
	const matching = narrow(selectFindings(trx, viewer, surveyId), query);
	const count = await countRows(trx, (most) => matching.clearSelect().select(sql.lit(1).as("one")).limit(most));
	const page = await pageByKey(orderOf(query), query, pageSize, ({ beyond, inOrder, place, limit }) =>
		matching.where(beyond).select(place.as("place")).orderBy(inOrder).limit(limit).execute(),
	);
	return { ...page, ...count };
}

/** @returns undefined outside the viewer's states, for another survey's finding, and where the answers were taken back. */
export async function findFinding(trx: Trx, viewer: Associate, surveyId: string, findingId: string) {
	return selectFindings(trx, viewer, surveyId).where("f.edit_finding_id", "=", findingId).executeTakeFirst();
}

/** How many answers of each survey wait to be checked, in the viewer's states. */
export async function countOpenFindings(trx: Trx, viewer: Associate): Promise<Map<string, number>> {
	const rows = await trx
		.selectFrom("collect.edit_finding as f")
		.innerJoinLateral(ofResponse, (join) => join.onTrue())
		.where("r.state_fips", "in", viewer.stateFips)
		.where("r.submitted_at", "is not", null)
		.where("f.outcome", "is", null)
		.groupBy("r.survey_id")
		.select(["r.survey_id", sql<number>`count(*)::int`.as("open")])
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

// Findings are few beside answers: what each is about is looked up by its key, which the planner takes for the longer way
// (2,000 of 30,000 responses: 100 ms).
type Expressions = ExpressionBuilder<DB & { f: DB["collect.edit_finding"] }, "f">;
const ofResponse = (eb: Expressions) =>
	eb
		.selectFrom("collect.response as x")
		.whereRef("x.response_id", "=", "f.response_id")
		.select(["x.survey_id", "x.response_id", "x.operation_id", "x.state_fips", "x.submitted_at"])
		.limit(1)
		.as("r");
type OfResponse = { survey_id: string; operation_id: string };
const inFrame = (eb: ExpressionBuilder<DB & { r: OfResponse }, "r">) =>
	eb
		.selectFrom("collect.frame_operation as x")
		.whereRef("x.survey_id", "=", "r.survey_id")
		.whereRef("x.operation_id", "=", "r.operation_id")
		.select(["x.state_fips", "x.county_fips", "x.stratum_key"])
		.limit(1)
		.as("o");
const ofOperation = (eb: ExpressionBuilder<DB & { r: OfResponse }, "r">) =>
	eb
		.selectFrom("directory.operation as x")
		.whereRef("x.operation_id", "=", "r.operation_id")
		.select(["x.name", "x.contact_name", "x.phone"])
		.limit(1)
		.as("d");

/** The one place that says whose findings an associate can see. */
function selectFindings(trx: Trx, viewer: Associate, surveyId: string) {
	return (
		trx
			.selectFrom("collect.edit_finding as f")
			.innerJoinLateral(ofResponse, (join) => join.onTrue())
			.innerJoinLateral(inFrame, (join) => join.onTrue())
			.innerJoinLateral(ofOperation, (join) => join.onTrue())
			.innerJoin("directory.county as c", "c.county_fips", "o.county_fips")
			.innerJoin("directory.state as s", "s.state_fips", "o.state_fips")
			.leftJoin("directory.planting as p", "p.planting_id", "f.planting_id")
			.leftJoin("collect.edit_question as q", "q.edit_finding_id", "f.edit_finding_id")
			.leftJoin("auth.person as b", "b.person_id", "f.closed_by")
			.where("r.survey_id", "=", surveyId)
			.where("r.state_fips", "in", viewer.stateFips)
			// Answers that their grower took back are nobody's to read but theirs.
			.where("r.submitted_at", "is not", null)
			.select([
				"f.edit_finding_id as findingId",
				"f.version",
				"r.survey_id as surveyId",
				"r.response_id as responseId",
				"r.operation_id as operationId",
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
			])
	);
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

function narrow(rows: ReturnType<typeof selectFindings>, query: FindingsQuery) {
	const { show, kind, crop, area, state } = query;
	const condition = stateConditions[state];
	return rows
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

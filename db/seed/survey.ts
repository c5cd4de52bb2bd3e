import { sql } from "kysely";
import { logEvent } from "#app/auth/event-log.server.ts";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { readyForms } from "#app/collect/forms/ready-forms.ts";
import { ensureForm } from "#app/collect/forms.server.ts";
import type { SizeClass } from "#app/collect/frame.ts";
import { openSurvey } from "#app/collect/survey-opening.server.ts";
import { cropKeys } from "#app/directory/crops.ts";
import { states } from "#db/reference/states.ts";
import { insertFacts, insertResponses } from "./insert-responses.ts";
import { fillMailings, noAlarm } from "./mailings.ts";
import { moveLog } from "./move-log.ts";
import type { SeedPlanting } from "./operations.ts";
import { listPlaces } from "./places.ts";
import { type Asked, inventReply } from "./replies.ts";
import type { Season } from "./seasons.ts";

/** One season's survey with its frame, answers, facts and mail, in the caller's transaction. */
export async function fillSeason(trx: Trx, associate: Associate, season: Season, now: Date): Promise<string> {
	await makeSurvey(trx, associate, season, now);
	const asked = await listAsked(trx, season.surveyId);
	const replies = asked.map((operation) => inventReply(season, operation, now));
	await setDispositions(trx, season.surveyId, replies);
	await insertResponses(trx, season, asked, replies);
	await insertFacts(trx, season, asked, replies);
	await fillMailings(trx, associate, season, now);
	const complete = replies.filter(({ disposition }) => disposition === "complete").length;
	return `${asked.length} asked, ${complete} answered`;
}

export async function hasSurvey(trx: Trx, { surveyId }: Season): Promise<boolean> {
	const row = await trx
		.selectFrom("collect.survey")
		.select("survey_id")
		.where("survey_id", "=", surveyId)
		.executeTakeFirst();
	return row !== undefined;
}

/** Opens the survey as the desk does, which freezes its frame, and then moves its times to where they belong. */
async function makeSurvey(trx: Trx, associate: Associate, season: Season, now: Date): Promise<void> {
	const { surveyId, openedAt, closesAt, closedAt } = season;
	const form = readyForms[season.form];
	const { formVersionId } = await ensureForm(trx, form);
	const stillToCome = new Date(now.getTime() + 86_400_000);
	await trx
		.insertInto("collect.survey")
		.values({
			survey_id: surveyId,
			form_version_id: formVersionId,
			season: season.season,
			title: JSON.stringify(form.title),
			crop_keys: [...cropKeys],
			closes_at: stillToCome,
			created_by: associate.personId,
			created_at: madeAt(season),
		})
		.execute();
	const stateFips = states.map((state) => state.stateFips);
	await trx
		.insertInto("collect.survey_state")
		.values(stateFips.map((state_fips) => ({ survey_id: surveyId, state_fips })))
		.execute();
	const opened = await openSurvey(trx, { ...associate, stateFips }, surveyId, noAlarm);
	if (opened !== "opened") throw new Error(`the survey of ${season.season} was not opened: ${opened}`);
	await trx
		.updateTable("collect.survey")
		.set({ opened_at: openedAt, closes_at: closesAt, closed_at: closedAt })
		.where("survey_id", "=", surveyId)
		.execute();
	await logSurvey(trx, associate, season);
}

/** A survey is made some days before it is opened. */
function madeAt({ openedAt }: Season): Date {
	return new Date(openedAt.getTime() - 3 * 86_400_000);
}

async function logSurvey(trx: Trx, { personId }: Associate, survey: Season) {
	const { surveyId, openedAt, closedAt, season } = survey;
	const about = { personId, subjectKind: "survey", subjectId: surveyId };
	await logEvent(trx, { ...about, action: "survey.created", detail: { season } });
	if (closedAt) await logEvent(trx, { ...about, action: "survey.closed" });
	await moveLog(trx, surveyId, madeAt(survey), "survey.created");
	await moveLog(trx, surveyId, openedAt, "survey.opened");
	if (closedAt) await moveLog(trx, surveyId, closedAt, "survey.closed");
}

/** The frame with what the answers are invented from, in an order that is the same each time. */
async function listAsked(trx: Trx, surveyId: string): Promise<Asked[]> {
	const placeOf = new Map(listPlaces().map((place) => [place.countyFips, place]));
	const rows = await trx
		.selectFrom("collect.frame_operation as f")
		.innerJoin("directory.operation as o", "o.operation_id", "f.operation_id")
		.innerJoin("directory.owner as w", "w.owner_id", "o.owner_id")
		.where("f.survey_id", "=", surveyId)
		.orderBy("o.operation_id")
		.select([
			"o.operation_id",
			"o.owner_id",
			"w.name as owner_name",
			"o.name",
			"f.county_fips",
			"f.state_fips",
			"f.size_class",
			"o.contact_name",
			"o.email",
			"o.language",
			"o.mass_unit",
			sql<boolean>`exists (select from auth.role_grant g where g.operation_id = o.operation_id)`.as("is_demo_grower"),
			sql<SeedPlanting[]>`(select jsonb_agg(to_jsonb(p) order by c.position, p.planting_id)
				from directory.planting p join directory.crop c using (crop_key)
				where p.operation_id = o.operation_id and p.removed_on is null)`.as("plantings"),
		])
		.execute();
	return rows.map(({ state_fips, size_class, is_demo_grower, ...operation }) => ({
		...(operation as Omit<Asked, "stateFips" | "sizeClass" | "place" | "isDemoGrower">),
		stateFips: state_fips,
		sizeClass: size_class as SizeClass,
		place: placeOf.get(operation.county_fips)!,
		isDemoGrower: is_demo_grower,
	}));
}

async function setDispositions(trx: Trx, surveyId: string, replies: { operation_id: string }[]): Promise<void> {
	await sql`update collect.frame_operation f set disposition = r.disposition, disposition_at = r.disposition_at
		from jsonb_to_recordset(${JSON.stringify(replies)}::jsonb)
			as r(operation_id uuid, disposition text, disposition_at timestamptz)
		where f.survey_id = ${surveyId} and f.operation_id = r.operation_id`.execute(trx);
}

import { sql } from "kysely";
import { z } from "zod";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { logEvent } from "#app/auth/event-log.server.ts";
import type { Problem } from "#app/lib/parse-form.ts";
import type { Words } from "./form.ts";
import { findFormToAsk } from "./forms.server.ts";
import { momentIn } from "./survey-closing.ts";
import type { ClosingForm, SurveyChange, SurveyDraft } from "./survey-draft.schema.ts";
import { Weighting } from "./weighting.ts";

export type SurveyState = "draft" | "open" | "closed";
export type Survey = Awaited<ReturnType<typeof listSurveys>>[number];

/** The surveys that ask in at least one of the viewer's states, newest season first; `archived` gives those put aside. */
export async function listSurveys(trx: Trx, viewer: Associate, { archived = false } = {}) {
	const rows = await selectSurveys(trx, viewer)
		.where("s.archived_at", archived ? "is not" : "is", null)
		.orderBy("s.season", "desc")
		.orderBy("s.created_at", "desc")
		.execute();
	return rows.map((row) => toSurvey(row, viewer));
}

/** @returns undefined for a survey that asks in none of the viewer's states, as for one that does not exist. */
export async function findSurvey(trx: Trx, viewer: Associate, surveyId: string) {
	if (!isId(surveyId)) return undefined;
	const row = await selectSurveys(trx, viewer).where("s.survey_id", "=", surveyId).executeTakeFirst();
	return row && toSurvey(row, viewer);
}

/** As `findSurvey`, for what a rehearsal has none of: mails, a brief of its own, releases. */
export async function findRealSurvey(trx: Trx, viewer: Associate, surveyId: string) {
	const survey = await findSurvey(trx, viewer, surveyId);
	return survey?.rehearsalOf ? undefined : survey;
}

/** Addresses can be typed by anyone; what is no id is simply not found. */
export function isId(text: string | undefined): text is string {
	return z.guid().safeParse(text).success;
}

/** The one place that says which surveys an associate can see, and with which counts. */
function selectSurveys(trx: Trx, viewer: Associate) {
	return trx
		.selectFrom("collect.survey as s")
		.innerJoin("collect.form_version as v", "v.form_version_id", "s.form_version_id")
		.where((eb) =>
			eb.exists(
				eb
					.selectFrom("collect.survey_state as g")
					.select(sql`1`.as("one"))
					.whereRef("g.survey_id", "=", "s.survey_id")
					.where("g.state_fips", "in", viewer.stateFips),
			),
		)
		.select((eb) => [
			"s.survey_id",
			"s.season",
			"s.title",
			"s.crop_keys",
			"s.closes_at",
			"s.opened_at",
			"s.closed_at",
			"s.archived_at",
			"s.created_by",
			"s.weighting",
			"s.rehearsal_of",
			sql<Words>`v.definition -> 'title'`.as("form_title"),
			sql<number>`(v.definition ->> 'minutes')::int`.as("minutes"),
			sql<
				string[]
			>`array(select g.state_fips from collect.survey_state g where g.survey_id = s.survey_id order by 1)`.as("states"),
			sql<string>`(select min(d.time_zone) from collect.survey_state g join directory.state d using (state_fips)
				where g.survey_id = s.survey_id)`.as("time_zone"),
			sql<boolean>`s.opened_at is not null and s.closed_at is null and s.closes_at > now()`.as("is_open"),
			eb
				.selectFrom("collect.frame_count as f")
				.select(sql<number>`sum(f.operations)::int`.as("n"))
				.whereRef("f.survey_id", "=", "s.survey_id")
				.where("f.crop_key", "=", "all")
				.where("f.state_fips", "in", viewer.stateFips)
				.as("in_frame"),
			eb
				.selectFrom("collect.answered_count as a")
				.select(sql<number>`sum(a.operations)::int`.as("n"))
				.whereRef("a.survey_id", "=", "s.survey_id")
				.where("a.crop_key", "=", "all")
				.where("a.state_fips", "in", viewer.stateFips)
				.as("answered"),
		]);
}

type SurveyRow = NonNullable<Awaited<ReturnType<ReturnType<typeof selectSurveys>["executeTakeFirst"]>>>;

function toSurvey(row: SurveyRow, viewer: Associate) {
	const statesNotHeld = row.states.filter((state) => !viewer.stateFips.includes(state));
	const state: SurveyState = row.is_open ? "open" : row.opened_at ? "closed" : "draft";
	return {
		surveyId: row.survey_id,
		season: row.season,
		title: row.title as Words,
		formTitle: row.form_title,
		minutes: row.minutes,
		cropKeys: row.crop_keys,
		weighting: Weighting.parse(row.weighting),
		stateFips: row.states,
		/** States of the survey whose growers the viewer does not see. */
		statesNotHeld,
		/** Whether the viewer may close it and move its closing time, which touch every state of the survey. */
		mayManage: statesNotHeld.length === 0 || row.created_by === viewer.personId,
		timeZone: row.time_zone,
		closesAt: row.closes_at,
		openedAt: row.opened_at,
		closedAt: row.closed_at,
		archivedAt: row.archived_at,
		/** The draft that it is a rehearsal of: invented operations answer it, and nothing of it is ever released. */
		rehearsalOf: row.rehearsal_of,
		state,
		inFrame: row.in_frame ?? 0,
		answered: row.answered ?? 0,
	};
}

/** Writes a draft. @returns its id, or what to mend: a state that is not granted, an unknown crop, a closing time gone by. */
export async function createSurvey(trx: Trx, viewer: Associate, draft: SurveyDraft, now = new Date()) {
	const form = await findFormToAsk(trx, draft.formKey);
	const read = await readDraft(trx, viewer, { ...draft, formTitle: form?.title }, now);
	if (!form || read.problems) return { problems: read.problems ?? [] };
	const survey = await trx
		.insertInto("collect.survey")
		.values({ ...read.values, form_version_id: form.formVersionId, created_by: viewer.personId })
		.returning("survey_id")
		.executeTakeFirstOrThrow();
	const surveyId = survey.survey_id;
	await writeStates(trx, surveyId, draft.states);
	await logEvent(trx, {
		personId: viewer.personId,
		action: "survey.created",
		subjectKind: "survey",
		subjectId: surveyId,
		detail: { season: draft.season, states: draft.states, form: draft.formKey },
	});
	return { surveyId };
}

/** What a draft's fields come to as columns, or what to mend in them. Without a title of its own it is called as its form is. */
export async function readDraft(
	trx: Trx,
	viewer: Associate,
	{ formTitle, ...draft }: SurveyChange & { formTitle: Words | undefined },
	now: Date,
) {
	const problems: Problem[] = [];
	const crops = await trx
		.selectFrom("directory.crop")
		.select("crop_key")
		.where("crop_key", "in", draft.crops)
		.execute();
	if (crops.length !== new Set(draft.crops).size) problems.push({ field: "crops", code: "choice_wrong" });
	if (draft.states.some((state) => !viewer.stateFips.includes(state)))
		problems.push({ field: "states", code: "choice_wrong" });
	const closing = await readClosing(trx, draft, now);
	if ("problem" in closing) problems.push(closing.problem);
	// A title in one language alone would stand beside the form's in the other: two names for one survey.
	if (draft.titleEn && !draft.titleEs) problems.push({ field: "titleEs", code: "empty" });
	if (draft.titleEs && !draft.titleEn) problems.push({ field: "titleEn", code: "empty" });
	if (!formTitle) problems.push({ field: "formKey", code: "choice_wrong" });
	if (problems.length > 0 || "problem" in closing || !formTitle) return { problems };
	const values = {
		season: draft.season,
		title: JSON.stringify({ en: draft.titleEn || formTitle.en, es: draft.titleEs || formTitle.es }),
		crop_keys: [...new Set(draft.crops)],
		closes_at: closing.closesAt,
	};
	return { values };
}

/** The states of a new survey, or of a draft that has none for the moment. */
export async function writeStates(trx: Trx, surveyId: string, states: string[]): Promise<void> {
	await trx
		.insertInto("collect.survey_state")
		.values([...new Set(states)].map((state) => ({ survey_id: surveyId, state_fips: state })))
		.execute();
}

/** Reads the fields of a closing time in one of the states' zones. */
export async function readClosing(
	trx: Trx,
	form: ClosingForm,
	now: Date,
): Promise<{ closesAt: Date } | { problem: Problem }> {
	const zone = await trx
		.selectFrom("directory.state")
		.select("time_zone")
		.where("time_zone", "=", form.timeZone)
		.limit(1)
		.execute();
	if (zone.length === 0) return { problem: { field: "timeZone", code: "choice_wrong" } };
	const closesAt = momentIn(form.closesOn, form.closesAt, form.timeZone);
	if (!closesAt) return { problem: { field: "closesOn", code: "date_wrong" } };
	if (closesAt <= now) return { problem: { field: "closesOn", code: "closing_past" } };
	if (closesAt.getTime() > now.getTime() + 2 * 366 * 86_400_000)
		return { problem: { field: "closesOn", code: "closing_far" } };
	return { closesAt };
}

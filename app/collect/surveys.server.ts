import { sql } from "kysely";
import { z } from "zod";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { logEvent } from "#app/auth/event-log.server.ts";
import type { Problem } from "#app/lib/parse-form.ts";
import type { Words } from "./form.ts";
import { findFormToAsk } from "./forms.server.ts";
import { readClosing } from "./survey-closing.ts";
import type { SurveyChange, SurveyDraft } from "./survey-draft.schema.ts";
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
			sql<string>`collect.clock_of_survey(s.survey_id)`.as("time_zone"),
			sql<string[]>`array(select g.state_fips from collect.survey_state g join directory.state d using (state_fips)
				where g.survey_id = s.survey_id and d.time_zone = collect.clock_of_survey(s.survey_id) order by 1)`.as("clock_states"),
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
		/** On whose clock its times are told and set. */
		timeZone: row.time_zone,
		/** Those of its states that have this clock. */
		clockStates: row.clock_states,
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
	const { problems, closesAt } = await checkDraft(trx, viewer, draft, now);
	if (!formTitle) problems.push({ field: "formKey", code: "choice_wrong" });
	if (problems.length > 0 || !formTitle || !closesAt) return { problems };
	const values = {
		season: draft.season,
		title: JSON.stringify({ en: draft.titleEn || formTitle.en, es: draft.titleEs || formTitle.es }),
		crop_keys: [...new Set(draft.crops)],
		closes_at: closesAt,
	};
	return { values };
}

/**
 * What the form alone cannot tell of a draft, in the order of its fields, and when it closes. Of one that came with other
 * faults, of whatever could be read of it, so that all is told at once.
 */
export async function checkDraft(
	trx: Trx,
	viewer: Associate,
	draft: Partial<SurveyChange>,
	now: Date,
): Promise<{ problems: Problem[]; closesAt?: Date }> {
	const problems: Problem[] = [];
	// A title in one language alone would stand beside the form's in the other: two names for one survey.
	if (draft.titleEs && "titleEn" in draft && !draft.titleEn) problems.push({ field: "titleEn", code: "empty" });
	if (draft.titleEn && "titleEs" in draft && !draft.titleEs) problems.push({ field: "titleEs", code: "empty" });
	if (draft.crops && !(await areCrops(trx, draft.crops))) problems.push({ field: "crops", code: "choice_wrong" });
	if (draft.states?.some((state) => !viewer.stateFips.includes(state)))
		problems.push({ field: "states", code: "choice_wrong" });
	if (!draft.closesOn) return { problems };
	const { closesOn, closesAt = "23:59", states = viewer.stateFips } = draft;
	const closing = readClosing({ closesOn, closesAt }, await clockOf(trx, states), now);
	if ("problem" in closing) return { problems: [...problems, closing.problem] };
	return { problems, closesAt: closing.closesAt };
}

async function areCrops(trx: Trx, keys: string[]): Promise<boolean> {
	const crops = await trx.selectFrom("directory.crop").select("crop_key").where("crop_key", "in", keys).execute();
	return crops.length === new Set(keys).size;
}

/** The clock that a survey of these states goes by; UTC where there are none such, which is a problem of its own. */
async function clockOf(trx: Trx, states: string[]): Promise<string> {
	const { rows } = await sql<{ zone: string | null }>`select collect.clock_of_states(${states}) as zone`.execute(trx);
	return rows[0]?.zone ?? "UTC";
}

/** Which states have which clock: what a form says beside the box of a time. */
export async function listStateClocks(trx: Trx, viewer: Associate): Promise<StateClock[]> {
	return trx
		.selectFrom("directory.state")
		.select(["state_fips as stateFips", "time_zone as timeZone"])
		.where("state_fips", "in", viewer.stateFips)
		.orderBy("name")
		.execute();
}
export type StateClock = { stateFips: string; timeZone: string };

/** The states of a new survey, or of a draft that has none for the moment. */
export async function writeStates(trx: Trx, surveyId: string, states: string[]): Promise<void> {
	await trx
		.insertInto("collect.survey_state")
		.values([...new Set(states)].map((state) => ({ survey_id: surveyId, state_fips: state })))
		.execute();
}

import { sql } from "kysely";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import type { Words } from "#app/lib/words.ts";
import { groupBy } from "#app/lib/group-by.ts";
import { sharesState } from "./form-drafts.server.ts";
import { readyFormKeys, readyForms } from "../forms/ready-forms.ts";

export type ListedForm = {
	formId: string;
	formKey: string;
	title: Words;
	isReady: boolean;
	mayEdit: boolean;
	makerName: string | null;
	stateFips: string[];
	/** The newest version, null where none was published. */
	version: number | null;
	surveys: UsingSurvey[];
};
export type UsingSurvey = { surveyId: string; title: Words; season: number };

/** The ready forms, then everybody's own, those that the viewer may change first, newest change first. */
export async function listForms(trx: Trx, viewer: Associate): Promise<ListedForm[]> {
	const surveys = groupBy(await listUsingSurveys(trx, viewer), ({ formKey }) => formKey);
	const rows = await selectForms(trx).execute();
	const used = (key: string) => surveys.get(key) ?? [];
	const own = rows.map((row): ListedForm => {
		const mayEdit = sharesState(viewer, row.state_fips);
		return {
			formId: row.form_id,
			formKey: row.form_key,
			title: row.title,
			isReady: false,
			mayEdit,
			makerName: row.maker_name,
			stateFips: row.state_fips,
			version: row.version,
			surveys: used(row.form_key),
		};
	});
	const ready = readyFormKeys.map((key): ListedForm => {
		const facts = { isReady: true, mayEdit: false, makerName: null, stateFips: [], version: null };
		return { formId: key, formKey: key, title: readyForms[key].title, ...facts, surveys: used(key) };
	});
	return [...ready, ...own.filter(({ mayEdit }) => mayEdit), ...own.filter(({ mayEdit }) => !mayEdit)];
}

function selectForms(trx: Trx) {
	return trx
		.selectFrom("collect.form as f")
		.innerJoin("collect.form_draft as d", "d.form_id", "f.form_id")
		.leftJoin("auth.person as maker", "maker.person_id", "f.made_by")
		.select([
			"f.form_id",
			"f.form_key",
			"f.state_fips",
			"maker.display_name as maker_name",
			sql<Words>`d.draft -> 'title'`.as("title"),
			sql<number | null>`(select max(version) from collect.form_version v where v.form_id = f.form_id)`.as("version"),
		])
		.orderBy("d.edited_at", "desc");
}

/** The surveys of the viewer's states with the form that each asks; of other states' surveys nothing is told. */
async function listUsingSurveys(trx: Trx, viewer: Associate) {
	const rows = await selectUsing(trx, viewer).execute();
	return rows.map((row) => ({
		formKey: row.form_key,
		surveyId: row.survey_id,
		title: row.title as Words,
		season: row.season,
	}));
}

function selectUsing(trx: Trx, viewer: Associate) {
	return trx
		.selectFrom("collect.survey as s")
		.innerJoin("collect.form_version as v", "v.form_version_id", "s.form_version_id")
		.innerJoin("collect.form as f", "f.form_id", "v.form_id")
		.where((eb) =>
			eb.exists(
				eb
					.selectFrom("collect.survey_state as g")
					.select(sql`1`.as("one"))
					.whereRef("g.survey_id", "=", "s.survey_id")
					.where("g.state_fips", "in", viewer.stateFips),
			),
		)
		.select(["f.form_key", "s.survey_id", "s.title", "s.season"])
		.orderBy("s.season", "desc")
		.orderBy("s.created_at", "desc");
}

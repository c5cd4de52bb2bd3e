import { logEvent } from "#app/auth/event-log.server.ts";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { FormDefinition } from "../form.ts";
import { findSurvey, isId, listSurveys, type SurveyState } from "../surveys.server.ts";
import type { Words } from "#app/lib/words.ts";
import { finishedForm } from "./before-opening.ts";
import { isSame } from "./canonical.ts";
import { differencesBetween, type FormDifference, onlyWordingDiffers } from "./difference.ts";
import { definitionOfDraft, draftOfDefinition } from "./draft.ts";
import { changeForm, type DeskForm, findDeskForm } from "./form-drafts.server.ts";

export type ListedVersion = {
	formVersionId: string;
	version: number;
	publishedAt: Date;
	publisherName: string | null;
	/** In what it differs from the version before. */
	differences: FormDifference[];
	surveys: VersionSurvey[];
};
export type VersionSurvey = {
	surveyId: string;
	title: Words;
	season: number;
	state: SurveyState;
	/** Whether the viewer may let it go over to the newest version now. */
	mayMove: boolean;
};

/** The versions of a form, newest first, with what each changed and which of the viewer's surveys ask it. */
export async function listVersions(trx: Trx, viewer: Associate, formId: string): Promise<ListedVersion[]> {
	const rows = await selectVersions(trx, formId);
	const surveys = await surveysByVersion(trx, viewer, rows);
	const newest = rows[0];
	return rows.map((row, index) => {
		const before = rows[index + 1];
		return {
			formVersionId: row.formVersionId,
			version: row.version,
			publishedAt: row.createdAt,
			publisherName: row.publisherName,
			differences: before ? differencesBetween(before.definition, row.definition) : [],
			surveys: (surveys.get(row.formVersionId) ?? []).map(({ mayManage, ...survey }) => ({
				...survey,
				mayMove: mayManage && row !== newest && !!newest && mayMove(survey.state, row.definition, newest.definition),
			})),
		};
	});
}

async function selectVersions(trx: Trx, formId: string) {
	const rows = await trx
		.selectFrom("collect.form_version as v")
		.leftJoin("auth.person as p", "p.person_id", "v.published_by")
		.select(["v.form_version_id", "v.version", "v.definition", "v.created_at", "p.display_name"])
		.where("v.form_id", "=", formId)
		.orderBy("v.version", "desc")
		.execute();
	return rows.map((row) => ({
		formVersionId: row.form_version_id,
		version: row.version,
		definition: FormDefinition.parse(row.definition),
		createdAt: row.created_at,
		publisherName: row.display_name,
	}));
}

async function surveysByVersion(trx: Trx, viewer: Associate, versions: { formVersionId: string }[]) {
	const byVersion = new Map<string, (Omit<VersionSurvey, "mayMove"> & { mayManage: boolean })[]>();
	if (versions.length === 0) return byVersion;
	const asking = await trx
		.selectFrom("collect.survey")
		.select(["survey_id", "form_version_id"])
		.where(
			"form_version_id",
			"in",
			versions.map(({ formVersionId }) => formVersionId),
		)
		.execute();
	const versionOf = new Map(asking.map(({ survey_id, form_version_id }) => [survey_id, form_version_id]));
	for (const { surveyId, title, season, state, mayManage } of await listSurveys(trx, viewer)) {
		const version = versionOf.get(surveyId);
		if (!version) continue;
		byVersion.set(version, [...(byVersion.get(version) ?? []), { surveyId, title, season, state, mayManage }]);
	}
	return byVersion;
}

/** A survey that nobody has been asked yet takes any version; an open one only what is said in other words. */
function mayMove(state: SurveyState, from: FormDefinition, to: FormDefinition): boolean {
	return state === "draft" || (state === "open" && onlyWordingDiffers(from, to));
}

export type Published =
	{ outcome: "published" | "unchanged"; version: number } | "not_found" | "unfinished" | "changed_meanwhile";

/**
 * Freezes the draft as the form's newest version. Published twice, it is one version. Surveys keep the version they have.
 * @param edit the draft's count that was looked at: what somebody changed since has not been read.
 */
export async function publishForm(trx: Trx, viewer: Associate, formId: string, edit: number): Promise<Published> {
	const form = await lockForm(trx, viewer, formId);
	if (!form) return "not_found";
	if (form.edit !== edit) return "changed_meanwhile";
	const finished = finishedForm(form.draft, new Set(form.held), form.published?.definition);
	if (!finished) return "unfinished";
	if (form.published && isSame(form.published.definition, finished))
		return { outcome: "unchanged", version: form.published.version };
	const version = (form.published?.version ?? 0) + 1;
	await trx
		.insertInto("collect.form_version")
		.values({ form_id: formId, version, definition: JSON.stringify(finished), published_by: viewer.personId })
		.execute();
	await logEvent(trx, {
		personId: viewer.personId,
		action: "form.published",
		subjectKind: "form",
		subjectId: formId,
		detail: { version },
	});
	return { outcome: "published", version };
}

/** The form's row is held too, so that two who publish at once make one version after the other. */
async function lockForm(trx: Trx, viewer: Associate, formId: string): Promise<DeskForm | undefined> {
	if (!isId(formId)) return undefined;
	await trx.selectFrom("collect.form").select("form_id").where("form_id", "=", formId).forUpdate().execute();
	const form = await findDeskForm(trx, viewer, formId);
	return form?.mayEdit ? form : undefined;
}

/** Puts the draft back to the newest version; that too can be undone. */
export async function resetDraft(trx: Trx, viewer: Associate, formId: string) {
	const form = await findDeskForm(trx, viewer, formId);
	if (!form?.mayEdit || !form.published) return "not_found" as const;
	const { definition } = form.published;
	return changeForm(trx, viewer, formId, () => draftOfDefinition(definition));
}

/** Lets a survey ask the newest version of its form. What growers have answered so far stays theirs. */
export async function moveSurvey(trx: Trx, viewer: Associate, formId: string, surveyId: string) {
	const survey = await findSurvey(trx, viewer, surveyId);
	if (!survey) return "not_found" as const;
	const held = await trx
		.selectFrom("collect.survey as s")
		.innerJoin("collect.form_version as v", "v.form_version_id", "s.form_version_id")
		.select(["v.form_version_id", "v.definition"])
		.where("s.survey_id", "=", surveyId)
		.where("v.form_id", "=", formId)
		.forUpdate("s")
		.executeTakeFirst();
	const [newest] = await selectVersions(trx, formId);
	if (!held || !newest) return "not_found" as const;
	if (held.form_version_id === newest.formVersionId) return "moved" as const;
	if (!survey.mayManage || !mayMove(survey.state, FormDefinition.parse(held.definition), newest.definition))
		return "keeps_version" as const;
	await trx
		.updateTable("collect.survey")
		.set({ form_version_id: newest.formVersionId })
		.where("survey_id", "=", surveyId)
		.execute();
	await logEvent(trx, {
		personId: viewer.personId,
		action: "survey.form_changed",
		subjectKind: "survey",
		subjectId: surveyId,
		detail: { version: newest.version },
	});
	return "moved" as const;
}

/** What publishing would change now. */
export function changesToPublish(form: Pick<DeskForm, "draft" | "published">): FormDifference[] {
	return form.published ? differencesBetween(form.published.definition, definitionOfDraft(form.draft)) : [];
}

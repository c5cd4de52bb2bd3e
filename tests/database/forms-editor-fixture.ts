import type { Associate } from "#app/auth/viewer.ts";
import type { FormDraft } from "#app/collect/editing/draft.ts";
import { addQuestion } from "#app/collect/editing/edit-questions.ts";
import { addScreen } from "#app/collect/editing/edit-screens.ts";
import { type Change, changeForm, createForm, findDeskForm } from "#app/collect/editing/form-drafts.server.ts";
import { publishForm } from "#app/collect/editing/form-versions.server.ts";
import { asDesk } from "./surveys-fixture.ts";

export const title = { en: "Hail", es: "Granizo" };

/** One screen with one whole number question, "trees_hit", in both languages. */
export function withOneQuestion(draft: FormDraft): FormDraft {
	const screened = addScreen(draft, { en: "Hail in your orchard", es: "Granizo en su huerto" }, false);
	const spot = { screen: screened.key };
	const text = { en: "Trees hit", es: "Árboles dañados" };
	const made = addQuestion(screened.draft, spot, "number", text);
	if (typeof made === "string") throw new Error(made);
	return made.draft;
}

/** A form of the viewer's with one question, ready to be published. */
export async function makeForm(viewer: Associate): Promise<string> {
	return asDesk(viewer, async (trx) => {
		const formId = await createForm(trx, viewer, title);
		await changeForm(trx, viewer, formId, withOneQuestion);
		return formId;
	});
}

export const change = (viewer: Associate, formId: string, made: Change) =>
	asDesk(viewer, (trx) => changeForm(trx, viewer, formId, made));

export const find = (viewer: Associate, formId: string) => asDesk(viewer, (trx) => findDeskForm(trx, viewer, formId));

/** Publishes a form as it now stands. */
export async function publish(viewer: Associate, formId: string) {
	const form = await find(viewer, formId);
	return asDesk(viewer, (trx) => publishForm(trx, viewer, formId, form!.edit));
}

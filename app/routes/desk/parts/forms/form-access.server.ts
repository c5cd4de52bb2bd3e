import type { RouterContextProvider } from "react-router";
import { type Access, requireAssociate } from "#app/auth/guard.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import {
	type Change,
	changeForm,
	type Changed,
	type DeskForm,
	findDeskForm,
} from "#app/collect/editing/form-drafts.server.ts";
import { refusal } from "#app/lib/refusal.ts";

type Context = Readonly<RouterContextProvider>;

/** A form that the asker may read. @throws refusal 401, 403 or 404. */
export async function getForm(context: Context, formId: string): Promise<{ desk: Access<Associate>; form: DeskForm }> {
	const desk = requireAssociate(context);
	const form = await desk.transaction((trx) => findDeskForm(trx, desk.viewer, formId));
	if (!form) throw refusal("form_not_found");
	return { desk, form };
}

/** A form that the asker may change; one of others is not found here, as there is nothing to be done to it. */
export async function getOwnForm(context: Context, formId: string) {
	const found = await getForm(context, formId);
	if (!found.form.mayEdit) throw refusal("form_not_found");
	return found;
}

/** Why a change was not made, as far as its page tells it. */
export type NotChanged = "answered" | "too_many" | "changed_meanwhile";

/** Makes a change, or says why not. @throws refusal 404 where the form or the part is not there any more. */
export async function makeChange(
	desk: Access<Associate>,
	formId: string,
	change: Change,
): Promise<Changed | NotChanged> {
	const made = await desk.transaction((trx) => changeForm(trx, desk.viewer, formId, change));
	if (made === "not_found") throw refusal("form_not_found");
	return made;
}

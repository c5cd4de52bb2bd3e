import { useTranslation } from "react-i18next";
import { data, Form, href, redirect } from "react-router";
import { z } from "zod";
import type { Route } from "./+types/form-screen";
import { sessionContext } from "#app/auth/session.server.ts";
import { findScreen } from "#app/collect/editing/draft.ts";
import { moveScreen, removeScreen, replaceScreen } from "#app/collect/editing/edit-screens.ts";
import { fingerprintOf } from "#app/collect/editing/form-drafts.server.ts";
import { fieldsOfScreen, readScreenFields, ScreenFields as Fields } from "#app/collect/editing/screen.schema.ts";
import type { Screen } from "#app/collect/form.ts";
import { ErrorSummary } from "#app/components/error-summary.tsx";
import { useFocusOnHash } from "#app/components/use-focus-on-hash.ts";
import { getLanguage } from "#app/i18n/middleware.server.ts";
import { lookAgain } from "#app/lib/look-again.ts";
import { parseForm, type Problem } from "#app/lib/parse-form.ts";
import { refusal } from "#app/lib/refusal.ts";
import { CheckList } from "./parts/forms/check-list.tsx";
import { EditorFrame } from "./parts/forms/editor-frame.tsx";
import { getForm, getOwnForm, makeChange, type NotChanged } from "./parts/forms/form-access.server.ts";
import { NotChangedNotice } from "./parts/forms/not-changed.tsx";
import { ScreenActions, ScreenFields, useScreenLabels } from "./parts/forms/screen-fields.tsx";

export async function loader({ context, params }: Route.LoaderArgs) {
	const { form } = await getForm(context, params.formId);
	const screen = findScreen(form.draft, params.key);
	if (!screen) throw refusal("form_not_found");
	const { draft, held, mayEdit } = form;
	return { draft, held, mayEdit, screen, seen: fingerprintOf(ownOf(screen)) };
}

/** What the page changes of a screen: its questions are changed on pages of their own. */
function ownOf(screen: Screen) {
	return { ...screen, questions: undefined, checks: undefined };
}

const Sent = Fields.extend({ intent: z.enum(["save", "up", "down", "remove"]), seen: z.string().max(40) });

export async function action({ context, params, request }: Route.ActionArgs) {
	const { desk } = await getOwnForm(context, params.formId);
	const parsed = parseForm(Sent, await request.formData());
	// The page's own controls cannot make such a form: a forged or broken one. What is amiss in a text is told below.
	if (!parsed.ok) throw refusal("form_not_understood");
	const { intent, seen, ...fields } = parsed.value;
	const language = getLanguage(context);
	let problems: Problem[] = [];
	const made = await makeChange(desk, params.formId, (draft, held) => {
		const now = findScreen(draft, params.key);
		if (!now) return "not_found";
		// Before anything typed is looked at: the page that comes back with problems shows, and has then seen, what is there now.
		if (fingerprintOf(ownOf(now)) !== seen) return "changed_meanwhile";
		if (intent === "remove") return removeScreen(draft, params.key, held);
		// Questions that somebody added meanwhile stay.
		const read = readScreenFields(fields, draft, now, language);
		problems = read.problems;
		if (!read.value) return draft;
		const saved = replaceScreen(draft, params.key, read.value, held);
		if (typeof saved === "string" || intent === "save") return saved;
		return moveScreen(saved, params.key, intent === "up" ? -1 : 1);
	});
	if (problems.length > 0) return answer(null, fields, problems);
	if (typeof made === "string") return answer(made, fields, []);
	context.get(sessionContext).flash("toast", { key: "forms:toast.saved" });
	const { formId } = params;
	if (intent === "remove") return redirect(href("/desk/forms/:formId", { formId }), 303);
	const here = href("/desk/forms/:formId/screens/:key", params);
	return redirect(intent === "save" ? here : `${here}#move-${intent}`, 303);
}

export const shouldRevalidate = lookAgain;

/** @returns 409 for what cannot be done now, 400 for what is to be mended. */
function answer(refused: NotChanged | null, values: Fields, problems: Problem[]) {
	return data({ refused, values, problems }, { status: refused ? 409 : 400 });
}

export default function FormScreen({ loaderData, actionData, params }: Route.ComponentProps) {
	const { t } = useTranslation("forms");
	const { draft, held, mayEdit, screen, seen } = loaderData;
	useFocusOnHash();
	const labels = useScreenLabels();
	const value = actionData?.values ?? fieldsOfScreen(screen);
	const isHeld = screen.questions.some(({ key }) => held.includes(key));
	return (
		<EditorFrame formId={params.formId} draft={draft} preview={screen}>
			<ErrorSummary problems={actionData?.problems} labels={labels} />
			<NotChangedNotice answer={actionData} />
			{mayEdit && (
				<Form method="post" noValidate key={`${screen.key} ${seen} ${actionData ? "sent" : ""}`}>
					<input type="hidden" name="seen" value={seen} />
					<ScreenFields draft={draft} screen={screen} value={value} problems={actionData?.problems} isHeld={isHeld} />
					<ScreenActions isHeld={isHeld} questions={screen.questions.length} />
				</Form>
			)}
			<CheckList formId={params.formId} draft={draft} screen={screen} mayEdit={mayEdit} title={t("check.title")} />
		</EditorFrame>
	);
}

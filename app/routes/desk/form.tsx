import { useTranslation } from "react-i18next";
import { data, href, redirect } from "react-router";
import { z } from "zod";
import type { Route } from "./+types/form";
import { sessionContext } from "#app/auth/session.server.ts";
import { dropForm, undoChange } from "#app/collect/editing/form-drafts.server.ts";
import { addQuestion, moveQuestion, questionTypes } from "#app/collect/editing/edit-questions.ts";
import { addScreen, moveScreen } from "#app/collect/editing/edit-screens.ts";
import { SomeText } from "#app/collect/editing/question.schema.ts";
import { ErrorSummary } from "#app/components/error-summary.tsx";
import { lookAgain } from "#app/lib/look-again.ts";
import { parseForm } from "#app/lib/parse-form.ts";
import { refusal } from "#app/lib/refusal.ts";
import { AddParts, DropForm, TitleForm, useAddLabels } from "./parts/forms/add-parts.tsx";
import { getForm, getOwnForm, makeChange, type NotChanged } from "./parts/forms/form-access.server.ts";
import { FormParts } from "./parts/forms/form-parts.tsx";
import { NotChangedNotice } from "./parts/forms/not-changed.tsx";

export async function loader({ context, params }: Route.LoaderArgs) {
	const { form } = await getForm(context, params.formId);
	const { draft, held, mayEdit, published } = form;
	return { draft, held, mayEdit, isPublished: published !== null };
}

const key = z.string().max(80);
const Step = z.discriminatedUnion("intent", [
	z.object({ intent: z.literal("undo"), edit: z.coerce.number().int() }),
	z.object({ intent: z.literal("title"), title: SomeText }),
	z.object({ intent: z.literal("add_screen"), screenTitle: SomeText, asked: z.enum(["once", "planting"]) }),
	z.object({ intent: z.literal("add_question"), screen: key, type: z.enum(questionTypes), text: SomeText }),
	z.object({ intent: z.literal("move"), what: z.string().regex(/^(question|screen):(up|down):[a-z0-9_]{1,80}$/) }),
	z.object({ intent: z.literal("drop") }),
]);
type Step = z.infer<typeof Step>;

export async function action({ context, params, request }: Route.ActionArgs) {
	const { desk } = await getOwnForm(context, params.formId);
	const parsed = parseForm(Step, await request.formData());
	if (!parsed.ok) return answer(null, parsed.values, parsed.problems);
	const { value: step } = parsed;
	const { formId } = params;
	const here = href("/desk/forms/:formId", { formId });
	if (step.intent === "drop") {
		const dropped = await desk.transaction((trx) => dropForm(trx, desk.viewer, formId));
		if (dropped !== "dropped") throw refusal("form_not_found");
		context.get(sessionContext).flash("toast", { key: "forms:toast.dropped" });
		return redirect(href("/desk/forms"), 303);
	}
	if (step.intent === "undo") {
		const undone = await desk.transaction((trx) => undoChange(trx, desk.viewer, formId, step.edit));
		if (undone === "changed_meanwhile") return answer("changed_meanwhile", parsed.values, []);
		if (undone !== "undone") throw refusal("form_not_found");
		context.get(sessionContext).flash("toast", { key: "forms:toast.undone" });
		return redirect(here, 303);
	}
	const made = await makeChange(desk, formId, (draft, held) => change(step, draft, held));
	if (typeof made === "string") return answer(made, parsed.values, []);
	return redirect(addressAfter(step, formId, made.key), 303);
}

/** @returns 409 for what cannot be done now, 400 for what is to be mended. */
function answer(
	refused: NotChanged | null,
	values: Record<string, unknown>,
	problems: { field: string; code: string }[],
) {
	return data({ refused, values, problems }, { status: refused ? 409 : 400 });
}

type EditStep = Exclude<Step, { intent: "undo" | "drop" }>;
type Args = Parameters<Parameters<typeof makeChange>[2]>;

function change(step: EditStep, draft: Args[0], held: Args[1]) {
	switch (step.intent) {
		case "title":
			return { ...draft, title: step.title };
		case "add_screen":
			return addScreen(draft, step.screenTitle, step.asked === "planting");
		case "add_question":
			return addQuestion(draft, { screen: step.screen }, step.type, step.text);
		case "move": {
			const [what, way, moved] = step.what.split(":") as ["question" | "screen", "up" | "down", string];
			const by = way === "up" ? -1 : 1;
			return what === "screen" ? moveScreen(draft, moved, by) : moveQuestion(draft, moved, by, held);
		}
	}
}

/** What was added is written on at once; what was moved comes back with the focus on its button, which may be pressed again. */
function addressAfter(step: EditStep, formId: string, added = ""): string {
	if (step.intent === "add_question")
		return `${href("/desk/forms/:formId/questions/:key", { formId, key: added })}#question`;
	const here = href("/desk/forms/:formId", { formId });
	if (step.intent === "move") return `${here}#move-${step.what.replaceAll(":", "-")}`;
	return step.intent === "add_screen" ? `${here}#screen-${added}` : here;
}

export const shouldRevalidate = lookAgain;

export default function FormPage({ loaderData, actionData, params }: Route.ComponentProps) {
	const { t } = useTranslation("forms");
	const { draft, held, mayEdit, isPublished } = loaderData;
	const labels = useAddLabels();
	const values = actionData?.values;
	const problems = actionData?.problems;
	return (
		<>
			<ErrorSummary problems={problems} labels={labels} />
			<NotChangedNotice answer={actionData} />
			<FormParts formId={params.formId} draft={draft} held={held} mayEdit={mayEdit} />
			{mayEdit && (
				<>
					<AddParts draft={draft} values={values} problems={problems} />
					<TitleForm title={draft.title} values={values} problems={problems} />
					{!isPublished && <DropForm />}
				</>
			)}
			{draft.screens.length === 0 && !mayEdit && <p>{t("parts.empty")}</p>}
		</>
	);
}

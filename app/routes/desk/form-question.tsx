import { useState } from "react";
import { useTranslation } from "react-i18next";
import { data, Form, href, redirect } from "react-router";
import { z } from "zod";
import type { Route } from "./+types/form-question";
import { sessionContext } from "#app/auth/session.server.ts";
import { definitionOfDraft, findQuestion, type FormDraft } from "#app/collect/editing/draft.ts";
import { removeQuestion } from "#app/collect/editing/edit-questions.ts";
import { fingerprintOf } from "#app/collect/editing/form-drafts.server.ts";
import {
	fieldsOfQuestion,
	QuestionFields as Fields,
	readQuestionFields,
} from "#app/collect/editing/question.schema.ts";
import type { Question } from "#app/collect/form.ts";
import { ErrorSummary } from "#app/components/error-summary.tsx";
import { useFocusOnHash } from "#app/components/use-focus-on-hash.ts";
import { getLanguage } from "#app/i18n/middleware.server.ts";
import { lookAgain } from "#app/lib/look-again.ts";
import { questionsOfMeasure } from "#app/lib/measure-questions.ts";
import { parseForm, type Problem } from "#app/lib/parse-form.ts";
import { refusal } from "#app/lib/refusal.ts";
import { useFormWords } from "./parts/forms/condition-words.ts";
import { EditorFrame } from "./parts/forms/editor-frame.tsx";
import { getForm, getOwnForm, makeChange, type NotChanged } from "./parts/forms/form-access.server.ts";
import { NotChangedNotice } from "./parts/forms/not-changed.tsx";
import { QuestionActions } from "./parts/forms/question-actions.tsx";
import { changeQuestion, placeAfter, QuestionIntent } from "./parts/forms/question-change.ts";
import { QuestionFacts } from "./parts/forms/question-facts.tsx";
import { QuestionFields, useQuestionLabels } from "./parts/forms/question-fields.tsx";

export async function loader({ context, params }: Route.LoaderArgs) {
	const { form } = await getForm(context, params.formId);
	const found = findQuestion(form.draft, params.key);
	if (!found) throw refusal("form_not_found");
	const { draft, held, mayEdit } = form;
	return { draft, held, mayEdit, ...found, seen: fingerprintOf(found.question) };
}

const Sent = Fields.extend({ intent: QuestionIntent, seen: z.string().max(40) });

export async function action({ context, params, request }: Route.ActionArgs) {
	const { desk } = await getOwnForm(context, params.formId);
	const parsed = parseForm(Sent, await request.formData());
	// The page's own controls cannot make such a form: a forged or broken one. What is amiss in a text is told below.
	if (!parsed.ok) throw refusal("form_not_understood");
	const { intent, seen, ...fields } = parsed.value;
	const language = getLanguage(context);
	let problems: Problem[] = [];
	const made = await makeChange(desk, params.formId, (draft, held) => {
		const now = findQuestion(draft, params.key)?.question;
		if (!now) return "not_found";
		// Before anything typed is looked at: the page that comes back with problems shows, and has then seen, what is there now.
		if (fingerprintOf(now) !== seen) return "changed_meanwhile";
		// What is half typed does not keep a question from being taken away.
		if (intent === "remove") return removeQuestion(draft, params.key, held);
		const read = readQuestionFields(fields, draft, params.key, language);
		problems = read.problems;
		return read.question ? changeQuestion(draft, read.question, intent, held) : draft;
	});
	if (problems.length > 0) return answer(null, fields, problems, params.key);
	if (typeof made === "string") return answer(made, fields, [], params.key);
	context.get(sessionContext).flash("toast", { key: "forms:toast.saved" });
	const { formId } = params;
	if (intent === "remove") return redirect(href("/desk/forms/:formId", { formId }), 303);
	const here = href("/desk/forms/:formId/questions/:key", { formId, key: made.key ?? params.key });
	return redirect(here + placeAfter(intent), 303);
}

export const shouldRevalidate = lookAgain;

/** @returns 409 for what cannot be done now, 400 for what is to be mended. `of` is the question that it was typed for. */
function answer(refused: NotChanged | null, values: Fields, problems: Problem[], of: string) {
	return data({ refused, values, problems, of }, { status: refused ? 409 : 400 });
}

export default function FormQuestion({ loaderData, actionData, params }: Route.ComponentProps) {
	const { draft, question, screen, mayEdit } = loaderData;
	const [typed, setTyped] = useState<{ of: Question; question: Question }>();
	useFocusOnHash();
	// A preview follows what is typed until the question itself has changed.
	const shown = typed?.of === question ? typed.question : question;
	const preview = { ...screen, questions: screen.questions.map((one) => (one === question ? shown : one)) };
	return (
		<EditorFrame formId={params.formId} draft={draft} preview={mayEdit ? { ...preview, questions: [shown] } : preview}>
			{mayEdit ? (
				<QuestionForm
					key={question.key}
					{...loaderData}
					sent={actionData?.of === question.key ? actionData : undefined}
					onTyped={(now) => setTyped({ of: question, question: now })}
				/>
			) : (
				<QuestionFacts draft={draft} question={question} />
			)}
		</EditorFrame>
	);
}

type QuestionFormProps = Route.ComponentProps["loaderData"] & {
	sent: { refused: NotChanged | null; values: Fields; problems: Problem[] } | undefined;
	onTyped: (question: Question) => void;
};

function QuestionForm({ draft, held, question, screen, seen, sent, onTyped }: QuestionFormProps) {
	const { t, i18n } = useTranslation("forms");
	const said = useFormWords();
	const labels = useQuestionLabels();
	const value = sent?.values ?? fieldsOfQuestion(question);
	return (
		<>
			<ErrorSummary problems={sent?.problems} labels={labels} />
			<NotChangedNotice answer={sent} />
			<Form
				id="question"
				tabIndex={-1}
				aria-label={t("question.formOf", { name: said(question.text) })}
				method="post"
				noValidate
				key={`${seen} ${sent ? "sent" : ""}`}
				onInput={({ currentTarget }) => {
					const now = questionIn(new FormData(currentTarget), draft, question.key, i18n.language);
					if (now) onTyped(now);
				}}
			>
				<input type="hidden" name="seen" value={seen} />
				{/* Enter in a text box presses the first button of a form: it saves, and moves nothing. */}
				<button type="submit" name="intent" value="save" tabIndex={-1} aria-hidden="true" className="sr-only" />
				<QuestionFields
					form={{ draft, held }}
					question={question}
					screen={screen}
					value={value}
					problems={sent?.problems}
				/>
				<QuestionActions
					draft={draft}
					screen={screen}
					question={question}
					isHeld={held.includes(question.key)}
					measures={definitionOfDraft(draft).measures.filter(
						(measure) => !measure.base && questionsOfMeasure(measure).includes(question.key),
					)}
				/>
			</Form>
		</>
	);
}

/** The question as it is typed now, if it already is one. */
function questionIn(form: FormData, draft: FormDraft, key: string, language: string): Question | undefined {
	const parsed = parseForm(Fields, form);
	return parsed.ok ? readQuestionFields(parsed.value, draft, key, language).question : undefined;
}

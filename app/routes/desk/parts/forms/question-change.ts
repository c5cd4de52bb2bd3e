import { z } from "zod";
import type { FormDraft } from "#app/collect/editing/draft.ts";
import { copyQuestion, moveQuestion, moveQuestionTo, replaceQuestion } from "#app/collect/editing/edit-questions.ts";
import { type Held, moved } from "#app/collect/editing/edit-screens.ts";
import type { Change } from "#app/collect/editing/form-drafts.server.ts";
import type { Question } from "#app/collect/form.ts";

/** What a button of the question's page does beside saving: every one but the removal keeps what is typed. */
export const QuestionIntent = z.string().regex(/^(save|up|down|copy|remove|to:[a-z0-9_]{1,80}|option_up:\d{1,2})$/);

/** Puts the question in its place as it was typed, and does what the button says. */
export function changeQuestion(draft: FormDraft, typed: Question, intent: string, held: Held): ReturnType<Change> {
	const [what, where = ""] = intent.split(":");
	const question = what === "option_up" ? withOptionUp(typed, Number(where)) : typed;
	const saved = replaceQuestion(draft, question, held);
	if (typeof saved === "string") return saved;
	switch (what) {
		case "up":
			return moveQuestion(saved, typed.key, -1, held);
		case "down":
			return moveQuestion(saved, typed.key, 1, held);
		case "to":
			return moveQuestionTo(saved, typed.key, where, "end", held);
		case "copy":
			return copyQuestion(saved, typed.key);
		default:
			return saved;
	}
}

/** Where the page opens after a button: on the same button, to be pressed again, and for a copy on the copy. */
export function placeAfter(intent: string): string {
	const [what, where = ""] = intent.split(":");
	switch (what) {
		case "up":
		case "down":
			return `#move-${what}`;
		case "to":
			return "#place";
		case "copy":
			return "#question";
		case "option_up":
			return Number(where) > 1 ? `#option-up-${Number(where) - 1}` : "#option-0";
		default:
			return "";
	}
}

function withOptionUp(question: Question, index: number): Question {
	if (!("options" in question) || index < 1 || index >= question.options.length) return question;
	return { ...question, options: moved<never>(question.options as never[], index, index - 1) } as Question;
}

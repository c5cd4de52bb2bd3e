import type { Question, Screen } from "../form.ts";
import { type FormDraft, findQuestion, findScreen, mostQuestions, questionsOf } from "./draft.ts";
import { type Held, moved, type NotMade, withoutWhatRestsOn, withScreens } from "./edit-screens.ts";
import { newKey, newQuestionKey } from "./new-key.ts";

export type QuestionType = Question["type"];
export const questionTypes = [
	...(["number", "percent", "date", "choice", "several", "rating", "short_text", "long_text", "photo"] as const),
] satisfies QuestionType[];

/** Where a question is put: at the end of a screen, or right behind another question of it. */
export type Spot = { screen: string; behind?: string };

/** A question that has just been thought of: with its text, and nothing else yet. */
export function newQuestion(key: string, type: QuestionType, text: Question["text"]): Question {
	const base = { key, text, required: false, sensitive: false } as const;
	switch (type) {
		case "number":
			return { ...base, type, unitFamily: "count" };
		case "percent":
			return { ...base, type, limits: { hardMin: 0, hardMax: 100 } };
		case "choice":
		case "several":
		case "rating":
			return { ...base, type, options: ["first", "second"].map(emptyOption) };
		case "short_text":
			return { ...base, type, maxLength: 200 };
		case "long_text":
			return { ...base, type, maxLength: 5000 };
		case "date":
		case "photo":
			return { ...base, type };
	}
}

function emptyOption(key: string) {
	return { key, text: { en: "", es: "" } };
}

/** Adds a question with a key of its own. */
export function addQuestion(
	draft: FormDraft,
	spot: Spot,
	type: QuestionType,
	text: Question["text"],
): { draft: FormDraft; key: string } | NotMade {
	if (!findScreen(draft, spot.screen)) return "not_found";
	if (questionsOf(draft).length >= mostQuestions) return "too_many";
	const key = newQuestionKey(draft, text.en || text.es);
	return { draft: inserted(draft, spot, newQuestion(key, type, text)), key };
}

/**
 * Puts a question in the place of the one with its key. One that growers have answered keeps its type, its unit and the
 * answers that could be chosen: what was said must go on meaning the same.
 */
export function replaceQuestion(draft: FormDraft, next: Question, held: Held): FormDraft | NotMade {
	const before = findQuestion(draft, next.key)?.question;
	if (!before) return "not_found";
	if (held.has(next.key) && !keepsAnswers(before, next)) return "answered";
	return withScreens(draft, (screen) => [
		{ ...screen, questions: screen.questions.map((one) => (one.key === next.key ? next : one)) },
	]);
}

/** Whether answers to one wording of a question are answers to the other. */
export function keepsAnswers(before: Question, next: Question): boolean {
	if (before.type !== next.type) return false;
	if (before.type === "number" && next.type === "number" && before.unitFamily !== next.unitFamily) return false;
	if (!("options" in before) || !("options" in next)) return true;
	const offered = new Set(next.options.map(({ key }) => key));
	return before.options.every(({ key }) => offered.has(key));
}

/** Moves a question by one place; from the end of its screen it goes on to the next one. At the end of the form it stays. */
export function moveQuestion(draft: FormDraft, key: string, by: -1 | 1, held: Held): FormDraft | NotMade {
	const screen = findQuestion(draft, key)?.screen;
	if (!screen) return "not_found";
	const at = screen.questions.findIndex((question) => question.key === key);
	const to = at + by;
	if (to >= 0 && to < screen.questions.length) {
		return withScreens(draft, (one) => [one === screen ? { ...one, questions: moved(one.questions, at, to) } : one]);
	}
	const next = draft.screens[draft.screens.indexOf(screen) + by];
	return next ? moveQuestionTo(draft, key, next.key, by === 1 ? "start" : "end", held) : draft;
}

/** Takes a question to another screen. One that was answered once an operation cannot become one of each planting. */
export function moveQuestionTo(
	draft: FormDraft,
	key: string,
	screenKey: string,
	end: "start" | "end",
	held: Held,
): FormDraft | NotMade {
	const found = findQuestion(draft, key);
	const target = findScreen(draft, screenKey);
	if (!found || !target) return "not_found";
	if (target.perPlanting !== found.screen.perPlanting && held.has(key)) return "answered";
	if (target === found.screen) return draft;
	const { question } = found;
	return withScreens(draft, (screen): Screen[] => {
		if (screen === found.screen) return [without(screen, key)];
		if (screen !== target) return [screen];
		return [
			{ ...screen, questions: end === "start" ? [question, ...screen.questions] : [...screen.questions, question] },
		];
	});
}

/** A second question like one that is there, right behind it, with keys of its own; what is checked of the first is not of it. */
export function copyQuestion(draft: FormDraft, key: string): { draft: FormDraft; key: string } | NotMade {
	const found = findQuestion(draft, key);
	if (!found) return "not_found";
	if (questionsOf(draft).length >= mostQuestions) return "too_many";
	const copyKey = newKey(key, allKeys(draft), "question");
	const copy = { ...found.question, key: copyKey };
	return { draft: inserted(draft, { screen: found.screen.key, behind: key }, copy), key: copyKey };
}

function allKeys(draft: FormDraft): string[] {
	return [...questionsOf(draft).map(({ question }) => question.key), ...draft.measures.map((measure) => measure.key)];
}

/** Takes a question away with the measures made of it, and words' codes. What waits for it stays and is told by the check before opening. */
export function removeQuestion(draft: FormDraft, key: string, held: Held): FormDraft | NotMade {
	const found = findQuestion(draft, key);
	if (!found) return "not_found";
	if (held.has(key)) return "answered";
	const left = withScreens(draft, (screen) => [screen === found.screen ? without(screen, key) : screen]);
	return withoutWhatRestsOn(left, new Set([key]));
}

/** A screen without a question, nor what it said of that question alone: shares, an order of days, checks beside it. */
function without(screen: Screen, key: string): Screen {
	const { sumToHundred, checks, ...rest } = screen;
	const shares = sumToHundred?.filter((share) => share !== key) ?? [];
	const beside = checks?.filter((check) => check.question !== key) ?? [];
	return {
		...rest,
		questions: screen.questions
			.filter((question) => question.key !== key)
			.map((question) => withoutOrder(question, key)),
		...(shares.length > 0 && { sumToHundred: shares }),
		...(beside.length > 0 && { checks: beside }),
	};
}

function withoutOrder(question: Question, key: string): Question {
	if (question.type !== "date" || question.notBefore !== key) return question;
	return { ...question, notBefore: undefined };
}

function inserted(draft: FormDraft, spot: Spot, question: Question): FormDraft {
	return withScreens(draft, (screen) => {
		if (screen.key !== spot.screen) return [screen];
		const behind = screen.questions.findIndex(({ key }) => key === spot.behind);
		const at = behind < 0 ? screen.questions.length : behind + 1;
		return [{ ...screen, questions: screen.questions.toSpliced(at, 0, question) }];
	});
}

import { quantityOf } from "../base-quantities.ts";
import { questionsOfMeasure } from "#app/lib/measure-questions.ts";
import type { Words } from "#app/lib/words.ts";
import type { Check, Question, Screen } from "../form.ts";
import { type FormDraft, findScreen } from "./draft.ts";
import { newCheckKey, newScreenKey } from "./new-key.ts";

/** What of a form growers have answered, and therefore stays: questions by key. */
export type Held = ReadonlySet<string>;
/** An edit that was not made, and why. A fault of use, not of code, so it is told and not thrown. */
export type NotMade = "not_found" | "answered" | "too_many";

/** Adds a screen at the end. */
export function addScreen(draft: FormDraft, title: Words, perPlanting: boolean): { draft: FormDraft; key: string } {
	const key = newScreenKey(draft, title.en || title.es);
	const screen: Screen = { key, title, perPlanting, questions: [] };
	return { draft: { ...draft, screens: [...draft.screens, screen] }, key };
}

/** Changes what a screen says of itself; who is asked (once or of each planting) stays once its questions have answers. */
export function replaceScreen(draft: FormDraft, key: string, next: Screen, held: Held): FormDraft | NotMade {
	const before = findScreen(draft, key);
	if (!before) return "not_found";
	const turned = next.perPlanting !== before.perPlanting;
	if (turned && before.questions.some((question) => held.has(question.key))) return "answered";
	return withScreens(draft, (screen) => (screen.key === key ? [next] : [screen]));
}

/** Moves a screen by one place; at an end of the form it stays. */
export function moveScreen(draft: FormDraft, key: string, by: -1 | 1): FormDraft | NotMade {
	const at = draft.screens.findIndex((screen) => screen.key === key);
	if (at < 0) return "not_found";
	return { ...draft, screens: moved(draft.screens, at, at + by) };
}

export function removeScreen(draft: FormDraft, key: string, held: Held): FormDraft | NotMade {
	const screen = findScreen(draft, key);
	if (!screen) return "not_found";
	if (screen.questions.some((question) => held.has(question.key))) return "answered";
	const gone = new Set(screen.questions.map((question) => question.key));
	return withoutWhatRestsOn(
		withScreens(draft, (one) => (one.key === key ? [] : [one])),
		gone,
	);
}

/** Adds a check to a screen, or puts it in the place of the one with its key. */
export function putCheck(draft: FormDraft, screenKey: string, check: Check): FormDraft | NotMade {
	const screen = findScreen(draft, screenKey);
	if (!screen) return "not_found";
	const checks = screen.checks ?? [];
	const next = checks.some(({ key }) => key === check.key)
		? checks.map((one) => (one.key === check.key ? check : one))
		: [...checks, check];
	return withScreens(draft, (one) => (one.key === screenKey ? [{ ...one, checks: next }] : [one]));
}

/** The key of a check that is new. */
export function checkKeyFor(draft: FormDraft, message: Words): string {
	return newCheckKey(draft, message.en || message.es);
}

export function removeCheck(draft: FormDraft, screenKey: string, checkKey: string): FormDraft | NotMade {
	const screen = findScreen(draft, screenKey);
	if (!screen?.checks?.some(({ key }) => key === checkKey)) return "not_found";
	const { checks = [], ...rest } = screen;
	const left = checks.filter(({ key }) => key !== checkKey);
	const next = left.length > 0 ? { ...rest, checks: left } : rest;
	return withScreens(draft, (one) => (one.key === screenKey ? [next] : [one]));
}

/** A form with each screen replaced by what is made of it. */
export function withScreens(draft: FormDraft, change: (screen: Screen) => Screen[]): FormDraft {
	return { ...draft, screens: draft.screens.flatMap(change) };
}

/** Takes away what is made of questions which are gone, and no page could mend: measures, and what words are counted as. */
export function withoutWhatRestsOn(draft: FormDraft, gone: ReadonlySet<string>): FormDraft {
	if (gone.size === 0) return draft;
	const left = withScreens(draft, (screen) => [
		{ ...screen, questions: screen.questions.map((question) => withoutCodesOf(question, gone)) },
	]);
	return withoutMeasuresOf(left, gone);
}

function withoutCodesOf(question: Question, gone: ReadonlySet<string>): Question {
	if (question.type !== "short_text" || !question.codes) return question;
	const { codes, ...rest } = question;
	if ("adds" in codes) return gone.has(codes.adds) ? rest : question;
	const to = codes.to.filter((key) => !gone.has(key));
	return gone.has(codes.moves) || to.length === 0 ? rest : { ...rest, codes: { ...codes, to } };
}

/** Takes the measures away, and what others say of being made of those. */
function withoutMeasuresOf(draft: FormDraft, gone: ReadonlySet<string>): FormDraft {
	const isOf = (measure: FormDraft["measures"][number]) =>
		questionsOfMeasure(measure).some((question) => gone.has(question));
	const bases = new Set(draft.measures.filter(isOf).map(({ key }) => quantityOf(key)));
	const measures = draft.measures
		.filter((measure) => !isOf(measure))
		.map((measure) =>
			measure.protects ? { ...measure, protects: measure.protects.filter((base) => !bases.has(base)) } : measure,
		);
	return { ...draft, measures };
}

export function moved<T>(list: T[], from: number, to: number): T[] {
	const target = Math.min(Math.max(to, 0), list.length - 1);
	const left = list.toSpliced(from, 1);
	return left.toSpliced(target, 0, list[from]!);
}

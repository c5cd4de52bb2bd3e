import { z } from "zod";
import type { Problem } from "#app/lib/parse-form.ts";
import type { Check, Screen } from "../form.ts";
import { questionsIn } from "#app/lib/condition.ts";
import { ConditionLines, linesOf, questionsUpTo, readCondition } from "./condition-lines.ts";
import type { FormDraft } from "./draft.ts";
import { checkKeyFor } from "./edit-screens.ts";
import { textProblems, TypedTexts } from "./question.schema.ts";

const noLines = { join: "all", unsure: "ask", lines: [] } as const;

/** A screen as the editor's fields hold it. */
export const ScreenFields = z.object({
	title: TypedTexts.default({ en: "", es: "" }),
	help: TypedTexts.default({ en: "", es: "" }),
	asked: z.enum(["once", "planting"]).catch("once"),
	/** Whether its percent questions make a hundred together. */
	sum: z.boolean().default(false),
	condition: ConditionLines.default({ ...noLines, lines: [] }),
});
export type ScreenFields = z.infer<typeof ScreenFields>;

type Read<T> = { value: T; problems: [] } | { value: undefined; problems: Problem[] };

export function readScreenFields(
	fields: ScreenFields,
	draft: FormDraft,
	before: Screen,
	language: string,
): Read<Screen> {
	const perPlanting = fields.asked === "planting";
	const standing = { offered: questionsUpTo(draft, before, false), perPlanting, draft };
	const read = readCondition(fields.condition, standing, "condition", language);
	const problems = [
		...textProblems("title", fields.title, { needed: true }),
		...textProblems("help", fields.help),
		...read.problems,
	];
	if (problems.length > 0) return { value: undefined, problems };
	const { keep, unsure } = fields.condition;
	const condition = keep ? before.condition : read.condition;
	const whenUnsure = keep ? before.whenUnsure : condition && unsure === "skip" ? unsure : undefined;
	const sumToHundred = fields.sum ? sharesOf(before) : [];
	return {
		value: {
			key: before.key,
			title: fields.title,
			...((fields.help.en !== "" || fields.help.es !== "") && { help: fields.help }),
			perPlanting,
			questions: before.questions,
			...(before.checks && { checks: before.checks }),
			...(sumToHundred.length > 0 && { sumToHundred }),
			...(condition && { condition }),
			...(whenUnsure && { whenUnsure }),
		},
		problems: [],
	};
}

/** The shares of a screen: those that it has, else all its percent questions. */
function sharesOf({ sumToHundred = [], questions }: Screen): string[] {
	if (sumToHundred.length > 0) return sumToHundred;
	return questions.filter(({ type }) => type === "percent").map(({ key }) => key);
}

export function fieldsOfScreen(screen: Screen): ScreenFields {
	const condition = linesOf(screen.condition);
	return {
		title: screen.title,
		help: screen.help ?? { en: "", es: "" },
		asked: screen.perPlanting ? "planting" : "once",
		sum: (screen.sumToHundred?.length ?? 0) > 0,
		condition: {
			keep: condition === undefined,
			unsure: screen.whenUnsure ?? "ask",
			...(condition ?? { join: "all", lines: [] }),
		},
	};
}

/** An edit check as the editor's fields hold it. */
export const CheckFields = z.object({
	kind: z.enum(["soft", "hard"]).catch("soft"),
	message: TypedTexts.default({ en: "", es: "" }),
	when: ConditionLines.default({ ...noLines, lines: [] }),
});
export type CheckFields = z.infer<typeof CheckFields>;

/** @param before the check that is changed, or undefined for a new one. */
export function readCheckFields(
	fields: CheckFields,
	draft: FormDraft,
	screen: Screen,
	before: Check | undefined,
	language: string,
): Read<Check> {
	const standing = { offered: questionsUpTo(draft, screen, true), perPlanting: screen.perPlanting, draft };
	const read = readCondition(fields.when, standing, "when", language);
	const when = fields.when.keep && before ? before.when : read.condition;
	const problems = [...textProblems("message", fields.message, { needed: true }), ...read.problems];
	if (problems.length > 0) return { value: undefined, problems };
	if (!when) return { value: undefined, problems: [{ field: "when.lines[0].question", code: "check_empty" }] };
	const own = new Set(screen.questions.map(({ key }) => key));
	// It stands beside a question of its own screen, so that there is an answer to confirm or to mend.
	const beside = questionsIn(when).find((key) => own.has(key));
	if (!beside) return { value: undefined, problems: [{ field: "when.lines[0].question", code: "check_elsewhere" }] };
	const key = before?.key ?? checkKeyFor(draft, fields.message);
	const question = before && questionsIn(when).includes(before.question) ? before.question : beside;
	return { value: { key, kind: fields.kind, when, question, message: fields.message }, problems: [] };
}

export function fieldsOfCheck(check: Check): CheckFields {
	const when = linesOf(check.when);
	return {
		kind: check.kind,
		message: check.message,
		when: { keep: when === undefined, unsure: "ask", ...(when ?? { join: "all", lines: [] }) },
	};
}

import { z } from "zod";
import { type Problem, problemMessage } from "#app/lib/parse-form.ts";
import type { Words } from "#app/lib/words.ts";
import type { Question } from "../form.ts";
import { parsePlainNumber, writeNumber } from "../typed-number.ts";
import { areCrossed } from "./before-opening.ts";
import { ConditionLines, linesOf, questionsBefore, readCondition } from "./condition-lines.ts";
import { type FormDraft, findQuestion, longestText } from "./draft.ts";
import { newQuestion, questionTypes } from "./edit-questions.ts";
import { newKey } from "./new-key.ts";

const tooLong = (max: number) => problemMessage({ code: "too_long_limit", detail: { max } });
/** One text in both languages, either of which may still be missing. */
export const BothTexts = z.object({
	en: z.string().trim().max(longestText, tooLong(longestText)).default(""),
	es: z.string().trim().max(longestText, tooLong(longestText)).default(""),
});
/** The same where at least one language is needed. */
export const SomeText = BothTexts.refine(({ en, es }) => en !== "" || es !== "", { path: ["en"], message: "empty" });

/**
 * The same as it is typed in a field among many: too long or empty, it is still read, so that all that was typed beside it
 * comes back. `textProblems` says what is to be mended.
 */
export const TypedTexts = z.object({
	en: z.string().trim().max(20_000).default(""),
	es: z.string().trim().max(20_000).default(""),
});

/** A text that is needed in one language at least, or may be left out. */
export function* textProblems(name: string, words: Words, { needed = false } = {}): Generator<Problem> {
	for (const language of ["en", "es"] as const) {
		if (words[language].length > longestText)
			yield { field: `${name}.${language}`, code: "too_long_limit", detail: { max: longestText } };
	}
	if (needed && !isSaid(words)) yield { field: `${name}.en`, code: "empty" };
}

const typedNumber = z.string().max(60, "too_long").optional();
export const limitNames = ["hardMin", "hardMax", "softMin", "softMax"] as const;
export const unitFamilies = ["mass", "area", "temperature", "length", "trees", "count"] as const;
/** A page has a row for each and two more, as long as there is room. */
export const mostOptions = 32;

const OptionRow = TypedTexts.extend({
	key: z.string().max(60).optional(),
	score: typedNumber,
	alone: z.boolean().default(false),
});

/** A question as the editor's fields hold it. What belongs to another type than the chosen one is left unread. */
export const QuestionFields = z.object({
	text: TypedTexts.default({ en: "", es: "" }),
	label: TypedTexts.default({ en: "", es: "" }),
	help: TypedTexts.default({ en: "", es: "" }),
	type: z.enum(questionTypes),
	required: z.boolean().default(false),
	sensitive: z.boolean().default(false),
	unitFamily: z.enum(unitFamilies).catch("count"),
	prefill: z.enum(["bearing_trees", "last_season"]).optional().catch(undefined),
	limits: z
		.object({ hardMin: typedNumber, hardMax: typedNumber, softMin: typedNumber, softMax: typedNumber })
		.default({}),
	notBefore: z.string().max(60).optional(),
	maxLength: typedNumber,
	options: z.array(OptionRow).max(mostOptions).default([]),
	condition: ConditionLines.default({ join: "all", unsure: "ask", lines: [] }),
});
export type QuestionFields = z.infer<typeof QuestionFields>;

/** The question that fields make in the place of the one with this key, or what is to be mended first. */
export function readQuestionFields(
	fields: QuestionFields,
	draft: FormDraft,
	key: string,
	language: string,
): { question: Question; problems: [] } | { question: undefined; problems: Problem[] } {
	const found = findQuestion(draft, key);
	if (!found) return { question: undefined, problems: [] };
	const before = found.question;
	const problems: Problem[] = [
		...textProblems("text", fields.text, { needed: true }),
		...textProblems("label", fields.label),
		...textProblems("help", fields.help),
	];
	const base = {
		// What a question has beside these fields, as ready forms' do, goes along in a copy.
		...(before.type === fields.type ? before : newQuestion(key, fields.type, fields.text)),
		text: fields.text,
		label: isSaid(fields.label) ? fields.label : undefined,
		help: isSaid(fields.help) ? fields.help : undefined,
		required: fields.type === "photo" ? false : fields.required,
		sensitive: fields.sensitive,
		...readAsked(fields, before, draft, found.screen.perPlanting, language, problems),
	} as Question;
	const question = withOwnParts(base, fields, before, language, problems);
	return problems.length > 0 ? { question: undefined, problems } : { question, problems: [] };
}

function readAsked(
	{ condition: lines }: QuestionFields,
	before: Question,
	draft: FormDraft,
	perPlanting: boolean,
	language: string,
	problems: Problem[],
): Pick<Question, "condition" | "whenUnsure"> {
	if (lines.keep) return { condition: before.condition, whenUnsure: before.whenUnsure };
	const standing = { offered: questionsBefore(draft, before.key), perPlanting, draft };
	const read = readCondition(lines, standing, "condition", language);
	problems.push(...read.problems);
	const skips = read.condition !== undefined && lines.unsure === "skip";
	return { condition: read.condition, whenUnsure: skips ? "skip" : undefined };
}

/** Types whose own fields are the same: what was typed into them holds for the other type too. */
const ownFields = {
	number: "number",
	percent: "percent",
	date: "date",
	choice: "options",
	several: "options",
	rating: "options",
	short_text: "length",
	long_text: "length",
	photo: "none",
} as const satisfies Record<Question["type"], string>;

/** What only some types have. Of a type whose fields the page did not have, it is what every new question has. */
function withOwnParts(
	question: Question,
	fields: QuestionFields,
	before: Question,
	language: string,
	problems: Problem[],
): Question {
	if (ownFields[question.type] !== ownFields[before.type]) return question;
	switch (question.type) {
		case "number":
		case "percent": {
			const unit = question.type === "percent" ? ("percent" as const) : undefined;
			const limits = readLimits(fields.limits, { language, unit }, problems);
			const ranged = Object.keys(limits).length > 0 ? { ...question, limits } : { ...question, limits: undefined };
			if (ranged.type === "percent") return ranged;
			return { ...ranged, unitFamily: fields.unitFamily, prefill: fields.prefill };
		}
		case "date":
			return { ...question, notBefore: fields.notBefore || undefined };
		case "short_text":
		case "long_text":
			return { ...question, maxLength: readLength(fields.maxLength, language, problems) };
		case "choice":
		case "several":
		case "rating":
			return { ...question, options: readOptions(fields, before, language, problems) } as Question;
		case "photo":
			return question;
	}
}

function readLength(typed: string | undefined, language: string, problems: Problem[]): number {
	const read = parsePlainNumber(typed?.trim() || "200", language);
	const length = read.ok ? read.value : 0;
	if (!Number.isInteger(length) || length < 1) problems.push({ field: "maxLength", code: "not_whole" });
	else if (length > 5000) problems.push({ field: "maxLength", code: "too_large_limit", detail: { max: 5000 } });
	return length;
}

type LimitsOf = { language: string; unit: "percent" | undefined };

function readLimits(typed: QuestionFields["limits"], { language, unit }: LimitsOf, problems: Problem[]) {
	const limits: Partial<Record<(typeof limitNames)[number], number>> = {};
	for (const name of limitNames) {
		const text = typed[name]?.trim() ?? "";
		if (text === "") continue;
		const read = parsePlainNumber(text, language, { belowZero: true, unit });
		if (read.ok) limits[name] = read.value;
		else problems.push({ field: `limits.${name}`, code: "not_a_number" });
	}
	const { hardMin, hardMax } = limits;
	if (hardMin !== undefined && hardMax !== undefined && hardMin > hardMax)
		problems.push({ field: "limits.hardMax", code: "limits_crossed" });
	else if (areCrossed(limits)) {
		const field = areCrossed({ ...limits, softMax: undefined }) ? "limits.softMin" : "limits.softMax";
		problems.push({ field, code: "limits_outside" });
	}
	return limits;
}

/** Rows with a text, each with the key that it had or one of its own; what a row's fields do not show stays. */
function readOptions(fields: QuestionFields, before: Question, language: string, problems: Problem[]) {
	const held = "options" in before ? before.options : [];
	const rows = fields.options.map((row, index) => ({ ...row, index })).filter(({ en, es }) => en !== "" || es !== "");
	const taken = new Set(rows.flatMap(({ key }) => key ?? []));
	if (rows.length < 2) problems.push({ field: `options[${rows.length}].en`, code: "options_few" });
	for (const { en, es, index } of rows) problems.push(...textProblems(`options[${index}]`, { en, es }));
	return rows.map(({ key, en, es, score, alone, index }) => {
		const was = held.find((option) => option.key === key);
		const own = was?.key ?? newKey(en || es, taken, "answer");
		taken.add(own);
		const crops = was && "crops" in was && was.crops ? { crops: was.crops } : {};
		const text: Words = { en, es };
		if (fields.type === "several") return { key: own, text, ...(alone && { alone }), ...crops };
		const typed = score?.trim() ?? "";
		if (fields.type !== "rating" || typed === "") return { key: own, text };
		const read = parsePlainNumber(typed, language, { belowZero: true });
		if (!read.ok) problems.push({ field: `options[${index}].score`, code: "not_a_number" });
		return { key: own, text, ...(read.ok && { score: read.value }) };
	});
}

function isSaid({ en, es }: Words): boolean {
	return en !== "" || es !== "";
}

/** A question as its fields hold it. */
export function fieldsOfQuestion(question: Question): QuestionFields {
	const none = { en: "", es: "" };
	const condition = linesOf(question.condition);
	const limits = "limits" in question ? (question.limits ?? {}) : {};
	return {
		text: question.text,
		label: question.label ?? none,
		help: question.help ?? none,
		type: question.type,
		required: question.required,
		sensitive: question.sensitive,
		unitFamily: question.type === "number" ? question.unitFamily : "count",
		prefill: question.type === "number" ? question.prefill : undefined,
		limits: Object.fromEntries(
			Object.entries(limits).flatMap(([name, n]) => (n === undefined ? [] : [[name, writeNumber(n)]])),
		),
		notBefore: question.type === "date" ? question.notBefore : undefined,
		maxLength: String("maxLength" in question ? question.maxLength : 200),
		options: "options" in question ? question.options.map(rowOfOption) : [],
		condition: {
			keep: condition === undefined,
			unsure: question.whenUnsure ?? "ask",
			...(condition ?? { join: "all", lines: [] }),
		},
	};
}

function rowOfOption(option: {
	key: string;
	text: Words;
	score?: number;
	alone?: boolean;
}): QuestionFields["options"][number] {
	const { key, text, score, alone = false } = option;
	return { key, ...text, alone, ...(score !== undefined && { score: writeNumber(score) }) };
}

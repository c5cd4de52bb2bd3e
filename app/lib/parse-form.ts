import { parseWithZod } from "@conform-to/zod/v4";
import type { z } from "zod";
import { readableForm } from "./readable-form.ts";
import type { Words } from "./words.ts";

/** One thing to mend: the field's name and a code whose words are `common:problem.<code>`, unless it brings its own. */
export type Problem = { field: string; code: string; detail?: Record<string, string | number>; words?: Words };
export type FormValues = Record<string, unknown>;
export type ParsedForm<T> =
	{ ok: true; value: T; values: FormValues } | { ok: false; values: FormValues; problems: Problem[] };

/**
 * Reads a sent form against its schema. Names like `plantings[0].trees` become nested values. What was typed
 * comes back whole, on failure with one problem a field: a schema's own message when it is a code (`empty`, `too_long`), else one
 * made from the kind of failure.
 */
export function parseForm<S extends z.ZodType>(schema: S, form: FormData): ParsedForm<z.infer<S>> {
	const submission = parseWithZod(readableForm(form), { schema: schema as never });
	const values = submission.payload;
	if (submission.status === "success") return { ok: true, value: submission.value as z.infer<S>, values };
	const problems = Object.entries(submission.error ?? {}).flatMap(([field, messages]) => {
		const message = messages?.[0];
		return message ? [{ field, ...toProblem(message) }] : [];
	});
	return { ok: false, values, problems };
}

/**
 * What can be read of a form in which something is to be mended. What else is wrong with it, as only the database knows, is
 * then told in the same answer.
 */
export function parseRest(schema: z.ZodObject, form: FormData, problems: Problem[]): FormValues {
	const faulty = problems.map(({ field }) => [boxOf(field), true as const]);
	const rest = parseForm(schema.omit(Object.fromEntries(faulty)), form);
	return rest.ok ? rest.value : {};
}

/** The field of the form that a problem's place is in: `crops` of `crops[2]`. */
export const boxOf = (field: string): string => field.split(/[.[]/, 1)[0]!;

/** The message by which a schema tells a problem with its detail, such as the largest number that is taken. */
export function problemMessage({ code, detail }: Omit<Problem, "field">): string {
	return detail ? `${code} ${JSON.stringify(detail)}` : code;
}

function toProblem(message: string): Omit<Problem, "field"> {
	const told = /^([a-z_]+) (\{.*\})$/.exec(message);
	if (told) return { code: told[1]!, detail: JSON.parse(told[2]!) as Problem["detail"] };
	return { code: toCode(message) };
}

function toCode(message: string): string {
	if (/^[a-z_]+$/.test(message)) return message;
	if (/received undefined|expected .* received undefined/i.test(message)) return "empty";
	if (/too big|<=|at most/i.test(message)) return "too_long";
	if (/too small|>=|at least/i.test(message)) return "empty";
	return "wrong";
}

import { z } from "zod";
import type { SentChange } from "#app/collect/step-change.ts";
import type { StepValues } from "#app/collect/step-fields.ts";
import { type Language, languages } from "#app/i18n/language.ts";
import { readableForm } from "#app/lib/readable-form.ts";
import { refusal } from "#app/lib/refusal.ts";

/** More than every box of a screen filled to its limit; a long paste still comes back beside its box. */
const mostBytes = 8_000_000;
const Posted = z.record(z.string().max(200), z.array(z.string()).max(100));
const ChangeId = z.string().regex(/^[\w-]{8,64}$/);
/** Beside its boxes a screen tells upon which version of the step it was typed; no question's key begins with an underscore. */
const Sent = z.object({
	_seen: z.tuple([
		z
			.string()
			.regex(/^\d{1,9}$/)
			.transform(Number),
	]),
	_change: z.tuple([ChangeId]).optional(),
	_unsure: z.array(ChangeId).max(100).optional(),
	_language: z.tuple([z.enum(languages)]).optional(),
});

/** What a screen's form sent: its boxes by name, and what it says of its change, unless it says nothing. */
export type PostedStep = {
	values: StepValues;
	/** With the language it was typed in, where that is told: a phone may send later what was typed in another. */
	sent: (SentChange & { language: Language | null }) | undefined;
};

/** @throws refusal 413 or 400 for what no form of ours sends. */
export async function readPosted(request: Request): Promise<PostedStep> {
	if (Number(request.headers.get("content-length") ?? 0) > mostBytes) throw refusal("too_much_text");
	const form = readableForm(await request.formData());
	const names = [...new Set(form.keys())];
	const all = Posted.safeParse(Object.fromEntries(names.map((name) => [name, form.getAll(name)])));
	if (!all.success) throw refusal("form_not_understood");
	const boxes = Object.entries(all.data).filter(([name]) => !name.startsWith("_"));
	return {
		values: Object.fromEntries(boxes.map(([name, values]) => [name, values.length === 1 ? values[0]! : values])),
		sent: readSent(all.data),
	};
}

function readSent(posted: Record<string, string[]>): PostedStep["sent"] {
	if (!Object.keys(posted).some((name) => name.startsWith("_"))) return undefined;
	const sent = Sent.safeParse(posted);
	if (!sent.success) throw refusal("form_not_understood");
	const { _seen, _change, _unsure, _language } = sent.data;
	return { seen: _seen[0], changeId: _change?.[0] ?? null, unsure: _unsure ?? [], language: _language?.[0] ?? null };
}

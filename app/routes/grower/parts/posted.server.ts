import { z } from "zod";
import type { StepValues } from "#app/collect/step-fields.ts";
import { refusal } from "#app/lib/refusal.ts";

/** More than every box of a screen filled to its limit; a long paste still comes back beside its box. */
const mostBytes = 8_000_000;
const Posted = z.record(z.string().max(200), z.array(z.string()).max(100));

/** What a screen's form sent, each name once. @throws refusal 413 or 400 for what no form of ours sends. */
export async function readPosted(request: Request): Promise<StepValues> {
	if (Number(request.headers.get("content-length") ?? 0) > mostBytes) throw refusal("too_much_text");
	const form = await request.formData();
	const names = [...new Set(form.keys())];
	const posted = Posted.safeParse(Object.fromEntries(names.map((name) => [name, form.getAll(name)])));
	if (!posted.success) throw refusal("form_not_understood");
	return Object.fromEntries(
		Object.entries(posted.data).map(([name, values]) => [name, values.length === 1 ? values[0]! : values]),
	);
}

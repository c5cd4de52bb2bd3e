import type { Words } from "#app/lib/words.ts";
import type { FormDefinition } from "../form.ts";
import { definitionOfDraft, type FormDraft } from "./draft.ts";

/**
 * A draft as a page can show it: a text that one language lacks is shown in the other, and one that is missing in both as
 * three points. Screens that ask nothing yet are left out.
 */
export function shownDefinition(draft: FormDraft): FormDefinition {
	const form = filled(definitionOfDraft(draft)) as FormDefinition;
	return { ...form, screens: form.screens.filter(({ questions }) => questions.length > 0) };
}

/** Whatever holds texts, with their gaps filled. */
export function filled(value: unknown): unknown {
	if (Array.isArray(value)) return value.map(filled);
	if (typeof value !== "object" || value === null) return value;
	if (isWords(value)) return { en: value.en || value.es || "…", es: value.es || value.en || "…" };
	return Object.fromEntries(Object.entries(value).map(([key, inner]) => [key, filled(inner)]));
}

function isWords(value: object): value is Words {
	return "en" in value && "es" in value && typeof value.en === "string" && typeof value.es === "string";
}

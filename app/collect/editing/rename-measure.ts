import type { Words } from "#app/lib/words.ts";
import { definitionOfDraft, type FormDraft } from "./draft.ts";
import type { NotMade } from "./edit-screens.ts";

/** Calls a measure otherwise: one that was written by hand in itself, one that a question has by default beside it. */
export function renameMeasure(draft: FormDraft, key: string, label: Words): FormDraft | NotMade {
	if (draft.measures.some((measure) => measure.key === key)) {
		return { ...draft, measures: draft.measures.map((one) => (one.key === key ? { ...one, label } : one)) };
	}
	if (!definitionOfDraft(draft).measures.some((measure) => measure.key === key)) return "not_found";
	return { ...draft, names: { ...draft.names, [key]: label } };
}

import type { FormDefinition } from "./form.ts";

/** What a base measure's quantity is called in the protection table: its key without "base.". */
export function quantityOf(measureKey: string): string {
	return measureKey.replace(/^base\./, "");
}

/** The quantities of a form that the protection table adds up, in the form's order. */
export function baseQuantities({ measures }: Pick<FormDefinition, "measures">): string[] {
	return measures.flatMap(({ base, key }) => (base ? quantityOf(key) : []));
}

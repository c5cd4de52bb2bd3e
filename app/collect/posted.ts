/** What the fields of a step hold, by name: one text, or several where a field can be repeated. */
export type StepValues = Record<string, string | string[]>;

/** Every text that was posted under a name. A file, or whatever else a forged request holds, counts as not posted. */
export function postedTexts(values: StepValues, name: string): string[] {
	if (!Object.hasOwn(values, name)) return [];
	const posted: unknown = values[name];
	return (Array.isArray(posted) ? posted : [posted]).filter((text): text is string => typeof text === "string");
}

/** What one box holds. */
export function postedText(values: StepValues, name: string): string {
	return postedTexts(values, name)[0] ?? "";
}

/** What was ticked or chosen under a name, each once. */
export function postedChoices(values: StepValues, name: string): string[] {
	return [...new Set(postedTexts(values, name).filter((choice) => choice !== ""))];
}

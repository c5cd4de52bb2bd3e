/** Whether anything within has a text that is empty in one language or both. */
export function isUntranslated(value: unknown): boolean {
	if (Array.isArray(value)) return value.some(isUntranslated);
	if (typeof value !== "object" || value === null) return false;
	if ("en" in value && "es" in value && typeof value.en === "string" && typeof value.es === "string")
		return value.en.trim() === "" || value.es.trim() === "";
	return Object.values(value).some(isUntranslated);
}

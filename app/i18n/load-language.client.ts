import type { Language } from "./language.ts";

const files = import.meta.glob<{ default: Record<string, unknown> }>("/locales/*/*.json");

/** Loads the words of one language, namespace by namespace, for the browser. */
export async function loadLanguage(language: Language): Promise<Record<string, Record<string, unknown>>> {
	const wanted = Object.entries(files).filter(
		([path]) => path.startsWith(`/locales/${language}/`) && !path.endsWith("/mail.json"),
	);
	const loaded = await Promise.all(
		wanted.map(async ([path, load]) => [path.split("/").pop()!.replace(".json", ""), (await load()).default] as const),
	);
	return Object.fromEntries(loaded);
}

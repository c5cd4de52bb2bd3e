import { entriesOf, type Texts } from "./texts.ts";

/** How two languages' texts differ in keys, plural forms and placeholders, and which are empty or left untranslated. */
export function disagreements({ en, es }: { en: Texts; es: Texts }, sameInBoth: (key: string) => boolean): string[] {
	const entries = { en: entriesOf(en), es: entriesOf(es) };
	const findings: string[] = [];
	for (const [language, own] of Object.entries(entries)) {
		const forms = new Intl.PluralRules(language).resolvedOptions().pluralCategories.toSorted().join();
		const other = language === "en" ? entries.es : entries.en;
		for (const entry of own.values()) {
			if (!other.has(entry.key)) findings.push(`${entry.key} is in ${language} only`);
			if ([...entry.forms.values()].some((text) => text.trim() === ""))
				findings.push(`${entry.key} is empty in ${language}`);
			const given = [...entry.forms.keys()].toSorted().join();
			if (given !== "" && given !== forms)
				findings.push(`${entry.key} has forms ${given} in ${language}, not ${forms}`);
		}
	}
	for (const entry of entries.en.values()) {
		const spanish = entries.es.get(entry.key);
		if (!spanish) continue;
		if (entry.forms.has("") !== spanish.forms.has("")) {
			const without = entry.forms.has("") ? "en" : "es";
			findings.push(`${entry.key} has no forms in ${without}`);
		}
		const [english, other] = [entry.placeholders, spanish.placeholders].map((set) => [...set].toSorted().join(" "));
		if (english !== other) findings.push(`${entry.key} is filled with "${english}" in en and "${other}" in es`);
	}
	for (const [key, text] of en) {
		if (es.get(key) === text && hasLetters(text) && !sameInBoth(key))
			findings.push(`${key} is "${text}" in both languages`);
	}
	return findings;
}

/** Letters of its own: "{{season}}: {{title}}" leaves nothing to translate. */
const hasLetters = (text: string) => /\p{L}/u.test(text.replace(/\{\{[^}]*\}\}/g, ""));

import type { MassUnit } from "./units.ts";

export type NumberProblem =
	"not_a_number" | "negative" | "number_unclear" | "unit_unclear" | "unit_not_known" | "too_long";
export type TypedNumber =
	| { ok: true; value: number; unit: MassUnit | null; percentSign: boolean }
	| { ok: false; code: NumberProblem; detail?: Record<string, string> };

const unitWords: Record<MassUnit, string[]> = {
	lb: ["lb", "lbs", "pound", "pounds", "libra", "libras", "#"],
	bu: ["bu", "bus", "bushel", "bushels"],
	ton: ["ton", "tons"],
	kg: ["kg", "kgs", "kilo", "kilos", "kilogram", "kilograms", "kilogramo", "kilogramos"],
};
/** Words that mean different weights to different people: a long, short or metric ton; 100 lb, 46 kg or 100 kg. */
const unclearUnits = new Set(["t", "tonelada", "toneladas", "tonne", "tonnes", "quintal", "quintales"]);
/** What is counted, typed after the count; it changes nothing. */
const countedThings =
	"trees tree bushes bush plants plant arboles árboles arbol árbol arbustos arbusto plantas planta".split(" ");

/**
 * Reads a number as growers type it: "$", spaces, thousands separators and a unit after the number are taken off.
 *
 * Commas and points are never guessed at where a guess could be wrong a thousandfold:
 * - two kinds of sign, or one sign twice, decide themselves: "1,234.5", "1.234,5", "1.234.567";
 * - "1,234" is a thousand and more in both languages, as the product itself writes numbers (en-US and es-US alike);
 * - "1.234" is asked back in both: three decimals of a pound are as odd as a thousand with a point is common elsewhere;
 * - "0.125" and any other number of decimals after a point is a decimal;
 * - "12,5" is twelve and a half in Spanish and asked back in English ("0,125" likewise).
 * @returns a finite number of at least 0, or the code of what to ask.
 */
export function parseTypedNumber(typed: string, language: string): TypedNumber {
	const text = typed
		.normalize("NFC")
		.replace(/[\s\u00a0\u2007\u202f]+/g, " ")
		.trim();
	if (text.length > 60) return { ok: false, code: "too_long" };
	const match = /^\$? ?([-−–+]?) ?\$? ?([0-9.,][0-9., ]*?) ?(%|#|[\p{L}.]+)?$/u.exec(text);
	if (!match) return { ok: false, code: "not_a_number" };
	const [, sign = "", figures = "", after = ""] = match;
	const unit = unitOf(after.toLowerCase().replace(/\.$/, ""));
	if (!unit.ok) return unit;
	const value = valueOf(figures, language);
	if (typeof value === "string") return { ok: false, code: value };
	if (/[-−–]/.test(sign) && value !== 0) return { ok: false, code: "negative" };
	return { ok: true, value, unit: unit.unit, percentSign: after === "%" };
}

function unitOf(
	word: string,
): { ok: true; unit: MassUnit | null } | { ok: false; code: NumberProblem; detail: { unit: string } } {
	if (word === "" || word === "%" || countedThings.includes(word)) return { ok: true, unit: null };
	for (const [unit, words] of Object.entries(unitWords)) {
		if (words.includes(word)) return { ok: true, unit: unit as MassUnit };
	}
	return { ok: false, code: unclearUnits.has(word) ? "unit_unclear" : "unit_not_known", detail: { unit: word } };
}

function valueOf(figures: string, language: string): number | "not_a_number" | "number_unclear" {
	// A space separates thousands or nothing: "12 5" is not 125.
	const text = /^\d{1,3}( \d{3})+([.,]\d+)?$/.test(figures) ? figures.replaceAll(" ", "") : figures;
	const whole = "\\d{1,3}";
	if (/^\d+$/.test(text)) return finite(text);
	if (new RegExp(`^${whole}(,\\d{3})+\\.\\d*$`).test(text)) return finite(text.replaceAll(",", ""));
	if (new RegExp(`^${whole}(\\.\\d{3})+,\\d*$`).test(text)) return finite(text.replaceAll(".", "").replace(",", "."));
	if (new RegExp(`^${whole}(,\\d{3}){2,}$`).test(text)) return finite(text.replaceAll(",", ""));
	if (new RegExp(`^${whole}(\\.\\d{3}){2,}$`).test(text)) return finite(text.replaceAll(".", ""));
	if (/^[1-9]\d{0,2},\d{3}$/.test(text)) return finite(text.replace(",", ""));
	if (/^[1-9]\d{0,2}\.\d{3}$/.test(text)) return "number_unclear";
	if (/^\d*\.\d+$|^\d+\.$/.test(text)) return finite(text);
	if (/^\d*,\d+$|^\d+,$/.test(text)) return language === "es" ? finite(text.replace(",", ".")) : "number_unclear";
	return "not_a_number";
}

function finite(text: string): number | "not_a_number" {
	const value = Number(text);
	return Number.isFinite(value) ? value : "not_a_number";
}

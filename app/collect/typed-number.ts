import type { Unit } from "./units.ts";

export type NumberProblem =
	"not_a_number" | "negative" | "number_unclear" | "unit_unclear" | "unit_not_known" | "too_long";
/** What may follow a number: a unit that is chosen beside the box, or a sign or word that goes with the question. */
export type TypedUnit = Unit | "percent" | "degrees" | "plants";
export type TypedNumber =
	| { ok: true; value: number; unit: TypedUnit | null }
	| { ok: false; code: NumberProblem; detail?: Record<string, string> };

const unitWords: Record<TypedUnit, string> = {
	lb: "lb, lbs, pound, pounds, libra, libras, #",
	bu: "bu, bus, bushel, bushels",
	half_bu: "half bu, half bushel, half bushels, medio bushel, medios bushels",
	peck: "pk, peck, pecks",
	dry_qt: "qt, qts, quart, quarts, dry qt, dry quart, dry quarts, cuarto seco, cuartos secos",
	crate: "crate, crates, caja, cajas, cajón, cajones",
	ton: "ton, tons, short ton, short tons, tonelada corta, toneladas cortas",
	kg: "kg, kgs, kilo, kilos, kilogram, kilograms, kilogramo, kilogramos",
	acre: "ac, acre, acres",
	ha: "ha, hectare, hectares, hectárea, hectáreas",
	fahrenheit: "f, °f, degrees f, degrees fahrenheit, grados f, grados fahrenheit",
	celsius: "c, °c, degrees c, degrees celsius, grados c, grados celsius",
	ft: "ft, foot, feet, row feet, pie, pies",
	m: "m, meter, meters, metre, metres, metro, metros",
	percent: "%, percent, por ciento",
	degrees: "°, degree, degrees, grado, grados",
	plants:
		"tree, trees, bush, bushes, plant, plants, árbol, árboles, arbol, arboles, arbusto, arbustos, planta, plantas",
};
const unitOfWord = new Map(
	Object.entries(unitWords).flatMap(([unit, words]) =>
		words.split(", ").map((word): [string, TypedUnit] => [word, unit as TypedUnit]),
	),
);
/** Words that mean different things: a long, short or metric ton; 100 lb, 46 kg or 100 kg; a dry quart or a peck. */
const unclearUnits = new Set("t tonelada toneladas tonne tonnes quintal quintales cuarto cuartos".split(" "));

/**
 * Reads a number as growers type it: "$", spaces, thousands separators and a unit after the number are taken off.
 *
 * Commas and points are never guessed at where a guess could be wrong a thousandfold:
 * - two kinds of sign, or one sign twice, decide themselves: "1,234.5", "1.234,5", "1.234.567";
 * - "1,234" is a thousand and more in both languages, as the product itself writes numbers (en-US and es-US alike);
 * - "1.234" is asked back in both: three decimals of a pound are as odd as a thousand with a point is common elsewhere;
 * - "0.125" and any other number of decimals after a point is a decimal;
 * - "12,5" is twelve and a half in Spanish and asked back in English ("0,125" likewise).
 * @param belowZero whether a number may be negative, as a temperature is.
 * @returns a finite number, at least 0 unless `belowZero`, or the code of what to ask.
 */
export function parseTypedNumber(typed: string, language: string, { belowZero = false } = {}): TypedNumber {
	const text = typed
		.normalize("NFC")
		.replace(/[\s\u00a0\u2007\u202f]+/g, " ")
		.trim();
	if (text.length > 60) return { ok: false, code: "too_long" };
	const match = /^\$? ?([-−–+]?) ?\$? ?([0-9.,][0-9., ]*?) ?(%|#|[°º\p{L}.][°º\p{L}. -]*)?$/u.exec(text);
	if (!match) return { ok: false, code: "not_a_number" };
	const [, sign = "", figures = "", after = ""] = match;
	const unit = readUnit(after);
	if (!unit.ok) return unit;
	const value = valueOf(figures, language);
	if (typeof value === "string") return { ok: false, code: value };
	const isNegative = /[-−–]/.test(sign) && value !== 0;
	if (isNegative && !belowZero) return { ok: false, code: "negative" };
	return { ok: true, value: isNegative ? -value : value, unit: unit.unit };
}

/** A number in a box that fixes its unit: with another unit typed behind it, it is not taken for one of that unit. */
export function parsePlainNumber(
	typed: string,
	language: string,
	{ unit, ...settings }: { unit?: TypedUnit; belowZero?: boolean } = {},
): { ok: true; value: number } | { ok: false } {
	const read = parseTypedNumber(typed, language, settings);
	const isPlain = read.ok && (read.unit === null || read.unit === unit);
	return isPlain ? { ok: true, value: read.value } : { ok: false };
}

/** A number as both languages read it back, with points for decimals and commas for thousands. */
export function writeNumber(value: number): string {
	const text = new Intl.NumberFormat("en-US", { maximumFractionDigits: 12 }).format(value);
	// Three decimals after one to three figures would be asked back; a fourth says that they are decimals.
	return /^-?[1-9]\d{0,2}\.\d{3}$/.test(text) ? `${text}0` : text;
}

type ReadUnit = { ok: true; unit: TypedUnit | null } | { ok: false; code: NumberProblem; detail: { unit: string } };

function readUnit(after: string): ReadUnit {
	const word = after.toLowerCase().replaceAll("º", "°").replace("° ", "°").replace("-", " ").replace(/\.$/, "").trim();
	const unit = word === "" ? null : unitOfWord.get(word);
	if (unit !== undefined) return { ok: true, unit };
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

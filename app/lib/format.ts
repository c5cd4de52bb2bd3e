import type { TFunction } from "i18next";
import { dateOfDay } from "./day-of-year.ts";
import { onceEach, sentencePattern } from "./sentence-pattern.ts";

/** Units of published figures, and those in which growers tell their answers. */
export type Unit =
	| ("percent" | "percent_of_normal" | "lb_per_tree" | "lb" | "trees" | "operations" | "score")
	| ("kg" | "tons" | "bushels" | "half_bushels" | "pecks" | "dry_quarts" | "crates")
	| ("acres" | "hectares" | "fahrenheit" | "celsius" | "row_feet" | "row_meters" | "tree" | "bush")
	| ("count" | "days" | "points");
/** The unit of a measure; `day` is a day of the year, which is told as a date. */
export type MeasureUnit = Unit | "day";
/** How a measure's figures are told. The season is the year whose dates its days are. */
export type FigureShape = { unit: MeasureUnit; decimals: number; season: number };

/** The locale of numbers and dates. es-US, as Spanish speakers in the states read decimal points and not commas. */
function localeOf(language: string): "en-US" | "es-US" {
	return language === "es" ? "es-US" : "en-US";
}

/** Kept by name, so that each is made once: a page tells of thousands of figures, and making one takes longer than many uses. */
const made = new Map<string, unknown>();
function kept<Maker>(name: string, make: () => Maker): Maker {
	const before = made.get(name) as Maker | undefined;
	if (before !== undefined) return before;
	// Options stand in the code and are few; of time zones, which people choose, there are hundreds.
	if (made.size >= 200) made.clear();
	const now = make();
	made.set(name, now);
	return now;
}
const nameOf = (kind: string, locale: string, options: object) => `${kind} ${locale} ${JSON.stringify(options)}`;

const numberFormat = (locale: string, options: Intl.NumberFormatOptions) =>
	kept(nameOf("number", locale, options), () => new Intl.NumberFormat(locale, options));
const dateFormat = (locale: string, options: Intl.DateTimeFormatOptions) =>
	kept(nameOf("date", locale, options), () => new Intl.DateTimeFormat(locale, options));
const listFormat = (locale: string) =>
	kept(`list ${locale}`, () => new Intl.ListFormat(locale, { type: "conjunction" }));
const pluralRules = (locale: string) => kept(`plural ${locale}`, () => new Intl.PluralRules(locale));
const collator = (locale: string) => kept(`collator ${locale}`, () => new Intl.Collator(locale, { numeric: true }));

/**
 * The one formatter of numbers, units and dates, in the reader's language. Units come from the shared words
 * (`common:unit.<unit>`, with `{{value}}` inside), since Intl knows no bushel.
 */
export function formatterFor(language: string, t: TFunction) {
	const locale = localeOf(language);
	const number = (value: number, decimals = 0) =>
		numberFormat(locale, { minimumFractionDigits: decimals, maximumFractionDigits: decimals }).format(value);
	const date = (value: Date | string, options: Intl.DateTimeFormatOptions) =>
		dateFormat(locale, options).format(typeof value === "string" ? new Date(value) : value);
	// A unit's words depend on the number by its plural alone.
	const withUnit = onceEach((unit: Unit) =>
		onceEach((plural: Intl.LDMLPluralRule, count: number) =>
			sentencePattern(["value"], ({ value }) => t(`common:unit.${unit}`, { value, count })),
		),
	);
	const quantity = (value: number, unit: Unit, decimals = 0) =>
		withUnit(unit)(pluralRules(locale).select(value), value)({ value: number(value, decimals) });
	/** "April 24", never broken over two lines; a day that the year does not have stays a number. */
	const dayOfSeason = (day: number, season: number) => {
		const on = dateOfDay(season, day);
		return on === null
			? t("common:unit.day", { value: number(day, 0) })
			: date(`${on}T12:00:00Z`, { day: "numeric", month: "long", timeZone: "UTC" }).replaceAll(" ", "\u00a0");
	};
	const figure = (value: number, { unit, decimals, season }: FigureShape) =>
		unit === "day" ? dayOfSeason(value, season) : quantity(value, unit, decimals);
	return {
		number,
		/** A value with its unit, as in "38%" or "12.4 lb per tree or bush". */
		quantity,
		/** A measure's value: a quantity, or the date of a day. */
		figure,
		/** Two values as one range, as in "35 to 41%" or "April 22 to April 27". */
		range: (lower: number, upper: number, shape: FigureShape) =>
			shape.unit === "day"
				? t("common:figure.days", { lower: figure(lower, shape), upper: figure(upper, shape) })
				: t("common:figure.interval", { lower: number(lower, shape.decimals), upper: figure(upper, shape) }),
		/** The two ends of a range for a sentence that says "between" them. */
		ends: (lower: number, upper: number, shape: FigureShape) => {
			const said = (value: number) => t("common:figure.dayInWords", { day: figure(value, shape) });
			return shape.unit === "day"
				? { lower: said(lower), upper: said(upper) }
				: { lower: number(lower, shape.decimals), upper: figure(upper, shape) };
		},
		/** How far a value can be off, a digit finer than the value itself: plain, or in days. */
		spread: (value: number, { unit, decimals }: FigureShape) =>
			unit === "day" ? quantity(value, "days", 1) : number(value, decimals + 1),
		/** How far two values of a measure are apart, whichever is larger: shares are points apart, and dates are days. */
		distance: (value: number, { unit, decimals }: Pick<FigureShape, "unit" | "decimals">) =>
			quantity(Math.abs(value), distanceUnit(unit), decimals),
		/** A stored day (2026-05-04, no time zone) with the month in words. */
		day: (value: string) =>
			date(`${value}T12:00:00Z`, { day: "numeric", month: "long", year: "numeric", timeZone: "UTC" }),
		/** A moment in the named zone, with the zone said. */
		moment: (value: Date | string, timeZone = "America/Chicago") =>
			date(value, {
				day: "numeric",
				month: "long",
				year: "numeric",
				hour: "numeric",
				minute: "2-digit",
				timeZone,
				timeZoneName: "short",
			}),
		/** What people call the clock of a zone, summer and winter alike: "Central Time". */
		clock: (timeZone: string) =>
			dateFormat(locale, { timeZone, timeZoneName: "longGeneric" })
				.formatToParts(Date.UTC(2026, 0))
				.find(({ type }) => type === "timeZoneName")?.value ?? timeZone,
		/** The calendar day of a moment in the named zone. */
		dayOf: (value: Date | string, timeZone = "America/Chicago") =>
			date(value, { day: "numeric", month: "long", year: "numeric", timeZone }),
		/** The time of day of a moment in the named zone. */
		timeOf: (value: Date | string, timeZone = "America/Chicago") =>
			date(value, { hour: "numeric", minute: "2-digit", timeZone, timeZoneName: "short" }),
		/** A file's size in the unit that reads best; kilo is a thousand, as the byte count itself may stand beside it. */
		fileSize: (bytes: number) => {
			const unit = bytes < 1e6 ? "kilobyte" : "megabyte";
			const size = bytes / (bytes < 1e6 ? 1e3 : 1e6);
			const maximumFractionDigits = size < 10 ? 1 : 0;
			return numberFormat(locale, { style: "unit", unit, maximumFractionDigits }).format(size);
		},
		list: (items: string[]) => listFormat(locale).format(items),
		compare: collator(locale).compare,
	};
}
export type Formatter = ReturnType<typeof formatterFor>;

function distanceUnit(unit: MeasureUnit): Unit {
	if (unit === "day") return "days";
	return unit === "percent" || unit === "percent_of_normal" ? "points" : unit;
}

/** As many decimals as a number has, up to three: what somebody typed is told as typed. */
export function decimalsOf(value: number): number {
	return Number(value.toFixed(3)).toString().split(".")[1]?.length ?? 0;
}

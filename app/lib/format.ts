import type { TFunction } from "i18next";

/** Units of published figures, and those in which growers tell their answers. */
export type Unit =
	| ("percent" | "percent_of_normal" | "lb_per_tree" | "lb" | "trees" | "operations" | "score")
	| ("kg" | "tons" | "bushels" | "half_bushels" | "pecks" | "dry_quarts" | "crates")
	| ("acres" | "hectares" | "fahrenheit" | "celsius" | "row_feet" | "row_meters" | "tree" | "bush")
	| ("count" | "day");

/** The locale of numbers and dates. es-US, as Spanish speakers in the states read decimal points and not commas. */
function localeOf(language: string): "en-US" | "es-US" {
	return language === "es" ? "es-US" : "en-US";
}

/**
 * The one formatter of numbers, units and dates, in the reader's language. Units come from the shared words
 * (`common:unit.<unit>`, with `{{value}}` inside), since Intl knows no bushel.
 */
export function formatterFor(language: string, t: TFunction) {
	const locale = localeOf(language);
	const number = (value: number, decimals = 0) =>
		new Intl.NumberFormat(locale, { minimumFractionDigits: decimals, maximumFractionDigits: decimals }).format(value);
	const date = (value: Date | string, options: Intl.DateTimeFormatOptions) =>
		new Intl.DateTimeFormat(locale, options).format(typeof value === "string" ? new Date(value) : value);
	return {
		number,
		/** A value with its unit, as in "38%" or "12.4 lb per tree or bush". */
		quantity: (value: number, unit: Unit, decimals = 0) =>
			t(`common:unit.${unit}`, { value: number(value, decimals), count: value }),
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
		/** The calendar day of a moment in the named zone. */
		dayOf: (value: Date | string, timeZone = "America/Chicago") =>
			date(value, { day: "numeric", month: "long", year: "numeric", timeZone }),
		list: (items: string[]) => new Intl.ListFormat(locale, { type: "conjunction" }).format(items),
		compare: new Intl.Collator(locale, { numeric: true }).compare,
	};
}
export type Formatter = ReturnType<typeof formatterFor>;

/** As many decimals as a number has, up to three: what somebody typed is told as typed. */
export function decimalsOf(value: number): number {
	return Number(value.toFixed(3)).toString().split(".")[1]?.length ?? 0;
}

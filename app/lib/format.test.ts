import { expect, test, vi } from "vitest";
import { formatterFor } from "./format.ts";

const t = ((key: string, { value }: { value?: string } = {}) => `${key} ${value}`) as never;

/** Counts what is made of Intl while something is done. */
function countMade(doing: () => void): number {
	let made = 0;
	const counted = (maker: object) =>
		new Proxy(maker, {
			construct: (target, given) => {
				made += 1;
				return Reflect.construct(target as typeof Intl.NumberFormat, given);
			},
		});
	const makers = ["NumberFormat", "DateTimeFormat", "ListFormat", "Collator", "PluralRules"] as const;
	vi.stubGlobal("Intl", Object.fromEntries(makers.map((name) => [name, counted(Intl[name])])));
	try {
		doing();
	} finally {
		vi.unstubAllGlobals();
	}
	return made;
}

function tellFigures(make: typeof formatterFor): void {
	for (let figure = 0; figure < 3000; figure += 1) {
		const format = make("en", t);
		format.figure(figure / 100, { unit: "percent", decimals: figure % 2, season: 2031 });
		format.figure(1 + (figure % 365), { unit: "day", decimals: 0, season: 2031 });
		format.dayOf("2031-10-02T00:00:00Z");
		format.list(["one", "two"]);
		format.compare("one", "two");
	}
}

test("a page that tells of thousands of figures makes each of its formatters once", async () => {
	// A copy of the module of its own: the other tests of the run share the one they import.
	vi.resetModules();
	const { formatterFor: unused } = await import("./format.ts");
	// Numbers without and with a decimal, days with and without a year, a list, plurals, and the order of names.
	expect(countMade(() => tellFigures(unused))).toBe(7);
	expect(countMade(() => tellFigures(unused))).toBe(0);
});

test("languages, decimals and time zones are told apart though their formatters are kept", () => {
	const [english, spanish] = [formatterFor("en", t), formatterFor("es", t)];
	for (let again = 0; again < 2; again += 1) {
		expect([english.number(1234.56), english.number(1234.56, 1)]).toEqual(["1,235", "1,234.6"]);
		expect(english.day("2031-05-04")).toBe("May 4, 2031");
		expect(spanish.day("2031-05-04")).toBe("4 de mayo de 2031");
		const late = "2031-10-02T03:00:00Z";
		expect([english.dayOf(late), english.dayOf(late, "UTC")]).toEqual(["October 1, 2031", "October 2, 2031"]);
		expect(english.list(["a", "b", "c"])).toBe("a, b, and c");
		expect(["Story 10", "Story 9"].toSorted(english.compare)).toEqual(["Story 9", "Story 10"]);
	}
});

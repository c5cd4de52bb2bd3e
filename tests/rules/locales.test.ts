import { execFileSync } from "node:child_process";
import { readdir, readFile } from "node:fs/promises";
import { join } from "node:path";
import { beforeAll, describe, expect, test } from "vitest";
import { listCounties } from "#app/lib/geography/counties.ts";
import { usTopology } from "#app/lib/geography/topology.server.ts";
import { disagreements } from "./locales/agreement.ts";
import { unusedKeys, wrongUses } from "./locales/coverage.ts";
import { problemCodesIn } from "./locales/problem-codes.ts";
import { entriesOf, readTexts, type Texts } from "./locales/texts.ts";
import { joinUses, type Uses, usesIn } from "./locales/uses.ts";
import { visibleTexts } from "./locales/visible-text.ts";

const root = join(import.meta.dirname, "../..");
const locales = join(root, "locales");

/** Keys, or beginnings of keys, whose text is right as it stands in both languages. */
const sameInBoth: Record<string, string> = {
	"common:app.name": "the product's name",
	"common:language.": "each language is named in its own words",
	"common:state.": "names of states that Spanish leaves alone",
	"common:crop.aronia": "the plant's botanical name",
	"public:crop_said.aronia": "the plant's botanical name",
	"common:unit.lb": "a unit's sign",
	"common:unit.kg": "a unit's sign",
	"common:unit.fahrenheit": "a unit's sign",
	"common:unit.celsius": "a unit's sign",
	"common:unit.pecks_": "the trade's word, also in Spanish",
	"common:unit.acres_": "the same word",
	"common:unit.bushels_": "the trade's word, also in Spanish",
	"grower:screen.unit.bu": "the trade's word, also in Spanish",
	"grower:screen.unit.acre": "the same word",
	"grower:screen.unit.fahrenheit": "a unit's sign",
	"grower:screen.unit.celsius": "a unit's sign",
};
const isSameInBoth = (key: string) => Object.keys(sameInBoth).some((start) => key.startsWith(start));

describe("the project", () => {
	let texts: { en: Texts; es: Texts };
	let sources: { file: string; text: string }[];
	let uses: Uses;
	beforeAll(async () => {
		texts = { en: await readTexts(join(locales, "en")), es: await readTexts(join(locales, "es")) };
		sources = await readSources();
		const namespaces = [...new Set([...texts.en.keys()].map((key) => key.split(":")[0]!))];
		uses = joinUses(sources.map(({ file, text }) => usesIn(file, text, namespaces)));
	});

	test("both languages have the same files", async () => {
		expect(await readdir(join(locales, "es"))).toEqual(await readdir(join(locales, "en")));
	});

	test("both languages have the same keys, the plural forms of each, the same placeholders and words of their own", () => {
		expect(texts.en.size).toBeGreaterThan(500);
		expect(disagreements(texts, isSameInBoth)).toEqual([]);
	});

	test("every text that is said to be the same in both languages is", () => {
		const same = [...texts.en].filter(([key, text]) => texts.es.get(key) === text).map(([key]) => key);
		const idle = Object.keys(sameInBoth).filter((start) => !same.some((key) => key.startsWith(start)));
		expect(idle).toEqual([]);
	});

	test("every key that code names has a text, and every placeholder in it a value", () => {
		expect(uses.named.length).toBeGreaterThan(400);
		expect(wrongUses(uses, entriesOf(texts.en))).toEqual([]);
	});

	test("every problem that a form can have is told in words of its own", () => {
		// Programs that ask the data API are told in English, by its own table of details.
		const ofForms = sources.filter(({ file }) => !/app\/(publish|routes)\/api\//.test(file));
		const codes = new Set(ofForms.flatMap(({ file, text }) => problemCodesIn(file, text)));
		expect(codes.size).toBeGreaterThan(15);
		// Made by a schema's own refinement, which gives its message; and the page for what nobody foresaw.
		for (const other of ["custom", "unexpected"]) codes.delete(other);
		expect([...codes].filter((code) => !texts.en.has(`common:problem.${code}`))).toEqual([]);
	});

	test("every text is used", () => {
		// The states' names go by codes that no source lists.
		const unused = unusedKeys(uses, entriesOf(texts.en)).filter((key) => !key.startsWith("common:state."));
		expect(unused).toEqual([]);
	});

	test("every state that has counties has a name", () => {
		const states = new Set(listCounties(usTopology()).map(({ stateFips }) => `common:state.${stateFips}`));
		const named = [...texts.en.keys()].filter((key) => key.startsWith("common:state."));
		expect(named.toSorted()).toEqual([...states].toSorted());
	});

	test("every text in a page's markup comes from the locales", () => {
		const pages = sources.filter(({ file }) => file.endsWith(".tsx"));
		expect(pages.length).toBeGreaterThan(50);
		expect(pages.flatMap(({ file, text }) => visibleTexts(file, text))).toEqual([]);
	});
});

/** Sources of what is shown, and the data that keys are put together from. */
async function readSources() {
	const listed = execFileSync("git", ["ls-files", "-co", "--exclude-standard", "app", "db/reference"], { cwd: root });
	const files = listed
		.toString()
		.split("\n")
		.filter((file) => /\.tsx?$/.test(file) && !/\.test\.tsx?$/.test(file));
	return Promise.all(files.map(async (file) => ({ file, text: await readFile(join(root, file), "utf8") })));
}

const textsOf = (words: Record<string, string>): Texts => new Map(Object.entries(words));

describe("the comparison of languages", () => {
	const sound = {
		en: {
			"desk:a.title": "Hello {{name}}",
			"desk:a.n_one": "{{count}} tree",
			"desk:a.n_other": "{{count}} trees",
			"desk:a.b": "{{a}}: {{b}}",
		},
		es: {
			"desk:a.title": "Buenos días, {{name}}",
			"desk:a.n_one": "{{count}} árbol",
			"desk:a.n_many": "{{count}} de árboles",
			"desk:a.n_other": "{{count}} árboles",
			"desk:a.b": "{{a}}: {{b}}",
		},
	};
	const compare = (en: Record<string, string>, es: Record<string, string>) =>
		disagreements({ en: textsOf({ ...sound.en, ...en }), es: textsOf({ ...sound.es, ...es }) }, isSameInBoth);

	test("finds nothing where the languages agree", () => {
		expect(compare({}, {})).toEqual([]);
	});

	test.each<[string, Record<string, string>, Record<string, string>, string]>([
		["a key without Spanish", { "desk:x": "Trees" }, {}, "desk:x is in en only"],
		["a key without English", {}, { "desk:x": "Árboles" }, "desk:x is in es only"],
		["an empty text", { "desk:x": "Trees" }, { "desk:x": " " }, "desk:x is empty in es"],
		[
			"a Spanish plural without its form for millions",
			{ "desk:x_one": "a", "desk:x_other": "b" },
			{ "desk:x_one": "c", "desk:x_other": "d" },
			"desk:x has forms one,other in es, not many,one,other",
		],
		[
			"a plural in one language only",
			{ "desk:x_one": "a", "desk:x_other": "b" },
			{ "desk:x": "c" },
			"desk:x has no forms in es",
		],
		[
			"another placeholder",
			{ "desk:x": "{{count}} trees" },
			{ "desk:x": "{{cuenta}} árboles" },
			`desk:x is filled with "count" in en and "cuenta" in es`,
		],
		["a lost tag", { "desk:x": "Read <b>this</b>" }, { "desk:x": "Lea esto" }, "desk:x is filled with"],
		[
			"an untranslated text",
			{ "desk:x": "Orchard of {{name}}" },
			{ "desk:x": "Orchard of {{name}}" },
			`desk:x is "Orchard of {{name}}" in both languages`,
		],
	])("finds %s", (_kind, en, es, finding) => {
		expect(compare(en, es)).toContainEqual(expect.stringContaining(finding));
	});
});

const inDesk = (code: string) =>
	usesIn("app/a.tsx", `function A() { const { t } = useTranslation("desk"); ${code} }`, ["common", "desk"]);

describe("the reading of keys in code", () => {
	const entries = entriesOf(
		textsOf({
			"common:yes": "Yes",
			"common:nav.map": "Map",
			"desk:today.title": "Today",
			"desk:today.greeting": "Hello {{name}}",
			"desk:today.due_one": "{{count}} thing",
			"desk:today.due_other": "{{count}} things",
			"desk:outcome.confirmed": "Confirmed",
			"desk:outcome.corrected": "Corrected",
		}),
	);
	test.each([
		`t("today.title")`,
		`t("common:yes")`,
		`t("today.greeting", { name })`,
		`t("today.greeting", { ...values })`,
		`t("today.due", { count: 3 })`,
		`t(done ? "outcome.confirmed" : "outcome.corrected")`,
		`t(\`outcome.\${outcome}\`)`,
		`t([\`outcome.\${outcome}\`, "today.title"])`,
		`const toast = { key: "common:nav.map" }`,
		`const say = (t) => t("nav.map")`,
	])("takes %s for right", (code) => {
		expect(wrongUses(inDesk(code), entries)).toEqual([]);
	});

	test.each([
		[`t("today.titel")`, "no such key"],
		[`t("nav.map")`, "desk:nav.map: no such key"],
		[`const toast = { key: "desk:nav.map" }`, "desk:nav.map: no such key"],
		[`t(done ? "outcome.confirmed" : "outcome.done")`, "desk:outcome.done: no such key"],
		[`t(\`results.\${outcome}\`)`, "no such key"],
		[`t("today")`, "no such key"],
		[`t("today.greeting")`, "not given name"],
		[`t("today.greeting", { nane })`, "not given name"],
		[`t("today.due")`, "not given count"],
		[
			`const { t } = useTranslation(); const a = () => { return t("today.title"); };`,
			"common:today.title: no such key",
		],
	])("finds what is wrong in %s", (code, finding) => {
		expect(wrongUses(inDesk(`{ ${code} }`), entries)).toEqual([expect.stringContaining(finding)]);
	});

	test("finds the texts that no code comes to", () => {
		const code = `t("today.title"); t("common:yes"); t(\`outcome.\${outcome}\`); const one = "confirmed";`;
		expect(unusedKeys(inDesk(code), entries)).toEqual([
			"common:nav.map",
			"desk:today.greeting",
			"desk:today.due",
			"desk:outcome.corrected",
		]);
	});
});

const found = (markup: string) => visibleTexts("app/a.tsx", `const a = ${markup};`);

test.each([
	[`import { z } from "zod"; const A = z.string({ error: "empty" }).max(200, "too_long");`, ["empty", "too_long"]],
	[`import { z } from "zod"; const A = z.uuid("choice_wrong");`, ["choice_wrong"]],
	[`if (from > to) return { code: "date_order" };`, ["date_order"]],
	[`const name = "date_order"; list.max("too_long");`, []],
])("the problems in %s are found", (code, problems) => {
	expect(problemCodesIn("app/a.ts", code).toSorted()).toEqual(problems);
});

describe("the reading of a page's markup", () => {
	test.each([
		`<p>Trees</p>`,
		`<p>{"Trees"}</p>`,
		`<p>{none ? "None" : count}</p>`,
		"<p>{`${count} trees`}</p>",
		`<p>{none && "None"}</p>`,
		`<p>{name ?? "Nobody"}</p>`,
		`<>Trees</>`,
		`<button aria-label="Close" />`,
		`<img alt={"A tree"} />`,
		`<input placeholder="Name" />`,
		`<Page title="Trees" />`,
		`<Field label={wide ? "Trees and bushes" : t("trees")} />`,
	])("finds the text in %s", (markup) => {
		expect(found(markup)).toHaveLength(1);
	});

	test.each([
		`<p className="text-quiet">{t("trees")} · {count}%</p>`,
		`<p>{kind === "tree" ? t("tree") : t("bush")}</p>`,
		`<p>{kind === "tree" && <Tree />} {" "} ×</p>`,
		`<Page title={t("title")} width="narrow" />`,
	])("finds none in %s", (markup) => {
		expect(found(markup)).toEqual([]);
	});
});

import { z } from "zod";
import { nearestName, plainText } from "#app/lib/closeness.ts";
import type { Problem } from "#app/lib/parse-form.ts";
import { type CropKey, cropKeys } from "../crops.ts";
import { type Row, textOf } from "./cells.ts";
import type { ImportChoices, ImportField } from "./columns.ts";
import type { Place } from "./places.ts";

export type Planting = {
	cropKey: CropKey;
	cultivar: string;
	bearingTrees: number | null;
	youngTrees: number | null;
	areaAcres: number | null;
	plantedYear: number | null;
};
/** What one row tells: of an operation, and of at most one of its plantings. Null is not told. */
export type Entry = {
	name: string;
	contactName: string | null;
	ownerName: string | null;
	email: string | null;
	phone: string | null;
	countyFips: string;
	stateFips: string;
	language: "en" | "es" | null;
	planting: Planting | null;
};
/** How a number is read, as growers' own are. */
export type ReadNumber = (typed: string, language: string) => { ok: true; value: number } | { ok: false; code: string };
export type EntryReader = {
	choices: ImportChoices;
	findPlace: (county: string, state: string) => Place | Problem;
	readNumber: ReadNumber;
};

const longest: Partial<Record<ImportField, number>> = {
	name: 200,
	contactName: 200,
	ownerName: 200,
	email: 254,
	phone: 40,
	cultivar: 100,
};
const acresPerHectare = 2.471053814671653;
const mostTrees = 10_000_000;

/** What a row says, or what is to be mended in it: one problem a field. */
export function readEntry({ cells }: Row, reader: EntryReader): { entry: Entry | null; problems: Problem[] } {
	const problems: Problem[] = [];
	const add = (field: ImportField, code: string, detail?: Problem["detail"]) => {
		problems.push({ field, code, ...(detail && { detail }) });
		return null;
	};
	const { columns } = reader.choices;
	const text = (field: ImportField): string | null => {
		const index = columns[field];
		const cell = index === undefined ? undefined : cells[index];
		if (cell !== undefined && typeof cell !== "string" && cell.text !== "")
			return add(field, cell.odd === "formula" ? "cell_formula" : "cell_merged");
		const max = longest[field];
		const typed = textOf(cell);
		if (max && typed.length > max) return add(field, "too_long_limit", { max });
		return typed || null;
	};
	const told = Object.fromEntries(
		(["name", "contactName", "ownerName", "email", "phone", "county", "state", "language"] as const).map((field) => [
			field,
			text(field),
		]),
	) as Record<ImportField, string | null>;
	const isOdd = (field: ImportField) => problems.some((problem) => problem.field === field);
	for (const field of ["name", "county"] as const) if (!told[field] && !isOdd(field)) add(field, "empty");
	if (told.email && !z.email().safeParse(told.email).success) add("email", "email_wrong");
	const language = told.language === null ? null : readLanguage(told.language);
	if (language === undefined) add("language", "language_unknown");
	let place: Place | null = null;
	if (told.county && !isOdd("state")) {
		const found = reader.findPlace(told.county, told.state ?? "");
		if ("code" in found) problems.push(found);
		else place = found;
	}
	const planting = readPlanting(reader, text, add);
	if (problems.length > 0 || !place || !told.name) return { entry: null, problems };
	const { name, contactName, ownerName, email, phone } = told;
	return {
		entry: { name, contactName, ownerName, email, phone, ...placeOf(place), language: language ?? null, planting },
		problems,
	};
}

const placeOf = ({ countyFips, stateFips }: Place): Place => ({ countyFips, stateFips });

type Text = (field: ImportField) => string | null;
type Add = (field: ImportField, code: string, detail?: Problem["detail"]) => null;

function readPlanting({ choices, readNumber }: EntryReader, text: Text, add: Add): Planting | null {
	const crop = text("crop");
	const number = (field: ImportField, whole: boolean) => {
		const typed = text(field);
		if (typed === null) return null;
		const read = readNumber(typed, choices.written);
		if (!read.ok) return add(field, numberProblems[read.code] ?? read.code);
		if (whole && !Number.isInteger(read.value)) return add(field, "not_whole");
		return read.value <= mostTrees ? read.value : add(field, "too_large_limit", { max: mostTrees });
	};
	const area = number("area", false);
	const facts = {
		cultivar: text("cultivar") ?? "",
		bearingTrees: number("bearingTrees", true),
		youngTrees: number("youngTrees", true),
		areaAcres: area === 0 || area === null ? null : area * (choices.areaUnit === "ha" ? acresPerHectare : 1),
		plantedYear: readYear(text("plantedYear"), add),
	};
	if (crop === null) {
		const isTold = facts.bearingTrees || facts.youngTrees || facts.areaAcres || facts.cultivar;
		if (isTold && choices.columns.crop !== undefined) add("crop", "empty");
		return null;
	}
	const cropKey = cropOfWord.get(plainText(crop));
	if (cropKey) return { cropKey, ...facts };
	const near = nearestName(crop, [...cropOfWord.keys()]);
	return near ? add("crop", "crop_near", { typed: crop, near }) : add("crop", "crop_unknown", { typed: crop });
}

/** What reading a number says, in the words for the one of a cell. */
const numberProblems: Record<string, string> = {
	number_unclear: "ambiguous_number",
	unit_unclear: "not_a_number",
	unit_not_known: "not_a_number",
	too_long: "not_a_number",
};

function readYear(typed: string | null, add: Add): number | null {
	if (typed === null) return null;
	const year = /^(\d{4})(-\d{2}-\d{2}|\.0)?$/.exec(typed)?.[1];
	return year && Number(year) >= 1850 && Number(year) <= 2100 ? Number(year) : add("plantedYear", "season_wrong");
}

const languageWords = { en: "en, english, ingles, eng, e", es: "es, spanish, espanol, castellano, spa, esp, s" };
const languageOfWord = new Map(
	Object.entries(languageWords).flatMap(([language, words]) =>
		words.split(", ").map((word): [string, "en" | "es"] => [word, language as "en" | "es"]),
	),
);
const readLanguage = (typed: string) => languageOfWord.get(plainText(typed));

const cropWords: Record<CropKey, string> = {
	apple: "apple, apples, manzana, manzanas, manzano, manzanos",
	tart_cherry:
		"tart cherry, tart cherries, sour cherry, sour cherries, cereza acida, cerezas acidas, cerezo acido, guinda, guindas, guindo",
	plum: "plum, plums, ciruela, ciruelas, ciruelo, ciruelos",
	aronia: "aronia, aronias, chokeberry, chokeberries, aronia berry, aronia berries",
	pawpaw: "pawpaw, pawpaws, paw paw, asimina, asiminas",
	hazelnut: "hazelnut, hazelnuts, hazel, hazels, filbert, filberts, avellana, avellanas, avellano, avellanos",
};
const cropOfWord = new Map(
	cropKeys.flatMap((crop) =>
		[crop.replace("_", " "), ...cropWords[crop].split(", ")].map((word) => [word, crop] as const),
	),
);

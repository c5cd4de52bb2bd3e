import type { Language } from "#app/i18n/language.ts";
import type { AskedQuestion } from "#app/lib/asked-form.ts";
import { dataColumns, observationStatuses, toCsv } from "../data-file.ts";
import type { Release } from "../release.ts";
import { definitionsOf, distinctOf, type FilePart, type FileSource, inBoth } from "./release-file.ts";

const steadiness = ["steady", "care", "rough"] as const;
const header = ["part", "code", "name", "description", "unit"];

/** What every column, measure and code of the files means, one row each, in one language, after a row of headings. */
export function codebookRows(source: FileSource, language: Language): (string | null)[][] {
	const { crops, words, terms, license } = source;
	const measures = distinctOf(source, definitionsOf).map(({ item }) => item);
	const t = words[language];
	return [
		header,
		...dataColumns.map((column) => [
			"column",
			column,
			t(`dataroom:column.${column}.name`),
			t(`dataroom:column.${column}.about`),
			null,
		]),
		...measures.map(({ key, label, description, unit }) => [
			"measure",
			key,
			label[language],
			description[language],
			t(`common:unitName.${unit}`),
		]),
		...crops.map((crop) => ["crop", crop, t(`common:crop.${crop}`), null, null]),
		...observationStatuses.map((code) => [
			"status",
			code,
			t(`dataroom:status.${code}.name`),
			t(`dataroom:status.${code}.about`),
			null,
		]),
		...steadiness.map((code) => [
			"steadiness",
			code,
			t(`common:steadiness.${code}`),
			t(`dataroom:steadiness.${code}`),
			null,
		]),
		...distinctOf(source, questionsOf).flatMap(({ item }) => questionRows(item, language)),
		["terms", "use", t("dataroom:terms.title"), terms[language], null],
		...(license ? [["terms", "license", license, null, null]] : []),
	];
}

const questionsOf = ({ asked }: FilePart) => (asked?.form.screens ?? []).flatMap(({ questions }) => questions);

/** A question, then what could be chosen. */
function questionRows({ key, text, help, options = [] }: AskedQuestion, language: Language): (string | null)[][] {
	return [
		["question", key, text[language], help?.[language] ?? null, null],
		...options.map((option) => ["option", `${key}.${option.key}`, option.text[language], null, null]),
	];
}

/** The codebook as a table, both languages below each other, told apart by the first column. */
export function codebookCsv(source: FileSource): string {
	const rows = (language: Language) =>
		codebookRows(source, language)
			.slice(1)
			.map((row) => [language, ...row]);
	return toCsv(["language", ...header], [...rows("en"), ...rows("es")]);
}

/** The codebook for programs, with how each release was made: the rules it was protected by and who was asked. */
export function codebookJson(source: FileSource): unknown {
	const { parts, isTable, crops, words, address, terms, license } = source;
	const told = (code: string, keyOf: (part: "name" | "about") => string) => ({
		code,
		name: inBoth(words, keyOf("name")),
		about: inBoth(words, keyOf("about")),
	});
	/** Of a table each definition says which of its releases tell it so. */
	const inReleases = (releases: number[]) => (isTable ? { releases } : {});
	const releases = parts.map(({ release, asked }) => ({
		release: releaseOf(release, address, isTable),
		method: release.method,
		rules: release.rules,
		form: asked && { version: asked.version, ...asked.form },
	}));
	return {
		...(isTable ? { table: { address }, releases } : releases[0]),
		terms_of_use: terms,
		license,
		columns: dataColumns.map((column) => told(column, (part) => `dataroom:column.${column}.${part}`)),
		measures: distinctOf(source, definitionsOf).map(({ item, releases: of }) => ({
			...inReleases(of),
			code: item.key,
			name: item.label,
			about: item.description,
			kind: item.kind,
			unit: { code: item.unit, name: inBoth(words, `common:unitName.${item.unit}`) },
			decimals: item.decimals,
		})),
		crops: crops.map((crop) => ({ code: crop, name: inBoth(words, `common:crop.${crop}`) })),
		areas: distinctOf(source, ({ areas }) => areas).map(({ item, releases: of }) => ({
			...inReleases(of),
			code: item.key,
			kind: item.kind,
			name: item.name,
			lies_in: item.parentKey,
			state_code: item.stateFips,
		})),
		statuses: observationStatuses.map((code) => told(code, (part) => `dataroom:status.${code}.${part}`)),
		steadiness: steadiness.map((code) => ({
			code,
			name: inBoth(words, `common:steadiness.${code}`),
			about: inBoth(words, `dataroom:steadiness.${code}`),
		})),
	};
}

function releaseOf(release: Release, address: string, isTable: boolean) {
	return {
		number: release.number,
		...(!isTable && { address }),
		title: release.title,
		season: release.season,
		form: release.formKey,
		published_at: release.publishedAt,
		edition: release.edition,
		revision_reason: release.revisionReason,
		code_version: release.codeVersion,
	};
}

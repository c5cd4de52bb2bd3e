import type { Language } from "#app/i18n/language.ts";
import { dataColumns, observationStatuses, toCsv } from "../data-file.ts";
import { type FileSource, inBoth } from "./release-file.ts";

const steadiness = ["steady", "care", "rough"] as const;
const header = ["part", "code", "name", "description", "unit"];

/** What every column, measure and code of a release's files means, one row each, in one language, after a row of headings. */
export function codebookRows({ measures, crops, words }: FileSource, language: Language): (string | null)[][] {
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

/** The codebook for programs, with how the release was made: the rules it was protected by and who was asked. */
export function codebookJson(source: FileSource): unknown {
	const { release, measures, crops, areas, words, address } = source;
	const told = (code: string, keyOf: (part: "name" | "about") => string) => ({
		code,
		name: inBoth(words, keyOf("name")),
		about: inBoth(words, keyOf("about")),
	});
	return {
		release: {
			number: release.number,
			address,
			title: release.title,
			season: release.season,
			form: release.formKey,
			published_at: release.publishedAt,
			edition: release.edition,
			revision_reason: release.revisionReason,
			code_version: release.codeVersion,
		},
		method: release.method,
		rules: release.rules,
		columns: dataColumns.map((column) => told(column, (part) => `dataroom:column.${column}.${part}`)),
		measures: measures.map(({ key, label, description, kind, unit, decimals }) => ({
			code: key,
			name: label,
			about: description,
			kind,
			unit: { code: unit, name: inBoth(words, `common:unitName.${unit}`) },
			decimals,
		})),
		crops: crops.map((crop) => ({ code: crop, name: inBoth(words, `common:crop.${crop}`) })),
		areas: areas.map(({ key, kind, name, parentKey, stateFips }) => ({
			code: key,
			kind,
			name,
			lies_in: parentKey,
			state_code: stateFips,
		})),
		statuses: observationStatuses.map((code) => told(code, (part) => `dataroom:status.${code}.${part}`)),
		steadiness: steadiness.map((code) => ({
			code,
			name: inBoth(words, `common:steadiness.${code}`),
			about: inBoth(words, `dataroom:steadiness.${code}`),
		})),
	};
}

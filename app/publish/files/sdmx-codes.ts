import type { ObservationStatus } from "../data-file.ts";
import { type FileSource, inBoth } from "./release-file.ts";

/** The maintainer of the structures in SDMX's sense, and the one version that a release ever has. */
export const agency = "TALLYGROVE";
export const version = "1.0.0";

export type CodeList = { id: string; name: string; codes: { id: string; names: { en: string; es: string } }[] };

/** SDMX ids hold no dot, which our measures' keys do; a hyphen they never hold, so this can be turned back. */
export const sdmxId = (key: string): string => key.replaceAll(".", "-");

/** CL_CONF_STATUS: whatever the reason, a withheld cell is C; telling reasons apart would help an attacker. */
export const confidentiality = (status: ObservationStatus): "C" | "F" => (status === "Q" ? "C" : "F");

/** The code lists of a release; the statuses are the part of SDMX's cross-domain lists that is used. */
export function codeLists(source: FileSource): CodeList[] {
	const { crops, words, isTable } = source;
	const measures = namedOnce(source.parts.flatMap((part) => part.measures));
	const areas = namedOnce(source.parts.flatMap((part) => part.areas));
	const listed = (ids: readonly string[], key: (id: string) => string) =>
		ids.map((id) => ({ id, names: inBoth(words, key(id)) }));
	return [
		{ id: "CL_FREQ", name: "Frequency", codes: [{ id: "A", names: inBoth(words, "dataroom:sdmx.annual") }] },
		{
			id: "CL_AREA",
			name: "Areas",
			codes: areas.map(({ key, name }) => ({ id: sdmxId(key), names: { en: name, es: name } })),
		},
		{ id: "CL_CROP", name: "Crops", codes: listed(crops, (crop) => `common:crop.${crop}`) },
		{
			id: "CL_MEASURE",
			name: "Measures",
			codes: measures.map(({ key, label }) => ({ id: sdmxId(key), names: { ...label } })),
		},
		...(isTable ? [releaseList(source)] : []),
		{
			id: "CL_UNIT",
			name: "Units",
			codes: listed([...new Set(measures.map(({ unit }) => unit))], (unit) => `common:unitName.${unit}`),
		},
		{
			id: "CL_STEADINESS",
			name: "Steadiness",
			codes: listed(["steady", "care", "rough"], (code) => `common:steadiness.${code}`),
		},
		{
			id: "CL_OBS_STATUS",
			name: "Observation status",
			codes: listed(["A", "Q", "M", "N", "O"], (code) => `dataroom:status.${code}.name`),
		},
		{
			id: "CL_CONF_STATUS",
			name: "Confidentiality status",
			codes: listed(["C", "F"], (code) => `dataroom:sdmx.confidentiality.${code}`),
		},
	];
}

/** A code stands in its list once, as the latest release names it. */
const namedOnce = <T extends { key: string }>(items: T[]): T[] => [
	...new Map(items.map((item) => [item.key, item])).values(),
];

const releaseList = ({ parts, words }: FileSource): CodeList => ({
	id: "CL_RELEASE",
	name: words.en("dataroom:column.release.name"),
	codes: parts.map(({ release: { number, title, season } }) => ({
		id: `${number}`,
		names: { en: `${title.en} ${season}`, es: `${title.es} ${season}` },
	})),
});

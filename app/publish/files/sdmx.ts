import { toCsv } from "../data-file.ts";
import type { FileSource } from "./release-file.ts";
import { agency, codeLists, confidentiality, sdmxId, version } from "./sdmx-codes.ts";

/** Of a table also the release: one season can have several. */
const dimensionsOf = ({ isTable }: FileSource): string[] => (isTable ? [...always, "RELEASE"] : always);
const always = ["FREQ", "REF_AREA", "TIME_PERIOD", "CROP", "MEASURE"];
const numbers = ["STANDARD_ERROR", "CV", "LOWER", "UPPER", "FIRST_QUARTILE", "THIRD_QUARTILE"] as const;
const words = ["RESPONDENTS_BAND", "STEADINESS", "UNIT_MEASURE", "OBS_STATUS", "CONF_STATUS"] as const;

/**
 * The cells as SDMX-CSV 2.0. A value that is missing on purpose is NaN, which the format keeps apart from one that is not
 * told; an attribute that is missing is empty. The numbers and their order are those of cells.csv.
 */
export function sdmxCsv(source: FileSource): string {
	const { parts, records, structureId, isTable } = source;
	const unitOf = new Map(
		parts.flatMap(({ release, measures }) => measures.map(({ key, unit }) => [`${release.number} ${key}`, unit])),
	);
	const structure = `${agency}:${structureId}(${version})`;
	return toCsv(
		["STRUCTURE", "STRUCTURE_ID", "ACTION", ...dimensionsOf(source), "OBS_VALUE", ...numbers, ...words],
		records.map((record) => [
			"datastructure",
			structure,
			"R",
			"A",
			sdmxId(record.area_code),
			record.season,
			record.crop,
			sdmxId(record.measure),
			...(isTable ? [record.release] : []),
			record.value ?? "NaN",
			record.standard_error,
			record.cv,
			record.lower,
			record.upper,
			record.first_quartile,
			record.third_quartile,
			record.respondents_band,
			record.steadiness,
			unitOf.get(`${record.release} ${record.measure}`) ?? null,
			record.status,
			confidentiality(record.status),
		]),
	);
}

const listOf: Record<string, string> = {
	FREQ: "CL_FREQ",
	REF_AREA: "CL_AREA",
	CROP: "CL_CROP",
	MEASURE: "CL_MEASURE",
	RELEASE: "CL_RELEASE",
	UNIT_MEASURE: "CL_UNIT",
	STEADINESS: "CL_STEADINESS",
	OBS_STATUS: "CL_OBS_STATUS",
	CONF_STATUS: "CL_CONF_STATUS",
};

/** The data structure with its concepts and code lists, as an SDMX-JSON 2.0 structure message. */
export function sdmxStructure(source: FileSource): unknown {
	const { structureId, title, publishedAt, terms, license } = source;
	const maintained = { agencyID: agency, version };
	return {
		meta: {
			schema: "https://json.sdmx.org/2.0.0/sdmx-json-structure-schema.json",
			id: structureId,
			prepared: publishedAt,
			contentLanguages: ["en", "es"],
			sender: { id: agency },
		},
		data: {
			conceptSchemes: [
				{
					...maintained,
					id: "CONCEPTS",
					name: "Concepts",
					concepts: [...dimensionsOf(source), "OBS_VALUE", ...numbers, ...words].map((id) => ({
						id,
						name: conceptName(id),
					})),
				},
			],
			codelists: codeLists(source).map(({ id, name, codes }) => ({
				...maintained,
				id,
				name,
				codes: codes.map((code) => ({ id: code.id, name: code.names.en, names: code.names })),
			})),
			dataStructures: [
				{
					...maintained,
					id: structureId,
					name: title.en,
					names: title,
					annotations: [
						{ id: "TERMS_OF_USE", type: "TERMS_OF_USE", text: terms.en, texts: terms },
						...(license ? [{ id: "LICENSE", type: "LICENSE", text: license, texts: { en: license } }] : []),
					],
					dataStructureComponents: components(dimensionsOf(source)),
				},
			],
		},
	};
}

const conceptName = (id: string) => id.charAt(0) + id.slice(1).toLowerCase().replaceAll("_", " ");
const urn = (kind: string, id: string) => `urn:sdmx:org.sdmx.infomodel.${kind}=${agency}:${id}`;

function component(id: string) {
	const list = listOf[id];
	const dataType = (numbers as readonly string[]).includes(id) || id === "OBS_VALUE" ? "Double" : "String";
	return {
		id,
		conceptIdentity: urn("conceptscheme.Concept", `CONCEPTS(${version}).${id}`),
		localRepresentation: list
			? { enumeration: urn("codelist.Codelist", `${list}(${version})`) }
			: { format: { dataType: id === "TIME_PERIOD" ? "ObservationalTimePeriod" : dataType } },
	};
}

function components(dimensions: string[]) {
	const attribute = (id: string) => ({
		...component(id),
		usage: id === "OBS_STATUS" || id === "CONF_STATUS" ? "mandatory" : "optional",
		attributeRelationship: { observation: {} },
	});
	return {
		dimensionList: {
			id: "DimensionDescriptor",
			dimensions: dimensions.filter((id) => id !== "TIME_PERIOD").map((id) => component(id)),
			timeDimension: component("TIME_PERIOD"),
		},
		measureList: { id: "MeasureDescriptor", measures: [component("OBS_VALUE")] },
		attributeList: { id: "AttributeDescriptor", attributes: [...numbers, ...words].map(attribute) },
	};
}

// What published rules ask of a data set that is told to machines as JSON-LD. `must` stands where a rule requires the property,
// `may` where it is only to be of the right type if it is there.

type Check = (value: unknown) => boolean;
export type Rule = { must?: Check; may?: Check };
type Rules = Record<string, Rule>;

const text: Check = (value) => typeof value === "string" && value.trim().length > 0;
const address: Check = (value) => typeof value === "string" && URL.canParse(value) && /^https?:/.test(value);
const matches =
	(pattern: RegExp): Check =>
	(value) =>
		typeof value === "string" && pattern.test(value);
const is =
	(wanted: unknown): Check =>
	(value) =>
		value === wanted;
const each =
	(check: Check): Check =>
	(value) =>
		Array.isArray(value) && value.length > 0 && value.every(check);
const thing =
	(rules: Rules): Check =>
	(value) =>
		faultsOf(value, rules).length === 0;

/** Each property that is missing or of another kind than a rule wants, with what stands there. */
export function faultsOf(value: unknown, rules: Rules): string[] {
	if (typeof value !== "object" || value === null) return [`${JSON.stringify(value)} is no object`];
	const record = value as Record<string, unknown>;
	return Object.entries(rules).flatMap(([name, { must, may }]) => {
		if (!(name in record)) return must ? [`${name} is missing`] : [];
		const fits = (must ?? may)!(record[name]);
		return fits ? [] : [`${name} is ${JSON.stringify(record[name])}`];
	});
}

const organization = thing({ "@type": { must: is("Organization") }, name: { must: text }, url: { may: address } });

/**
 * schema.org/Dataset and schema.org/DataDownload (release 29): the types of the properties; and which of them search engines
 * require, from Google's "Dataset structured data": name, description of 50 to 5,000 characters, and contentUrl of downloads.
 */
export const schemaOrgRules: Rules = {
	"@context": { must: matches(/^https:\/\/schema\.org\/?$/) },
	"@type": { must: is("Dataset") },
	name: { must: text },
	description: { must: (value) => typeof value === "string" && value.length >= 50 && value.length <= 5000 },
	url: { must: address },
	identifier: { must: address },
	version: { must: text },
	inLanguage: { must: matches(/^[a-z]{2}(-[A-Z]{2})?$/) },
	creator: { must: organization },
	publisher: { must: organization },
	datePublished: { must: matches(/^\d{4}-\d\d-\d\d(T[\d:.]+Z)?$/) },
	// A year, a day, or an interval of days (ISO 8601).
	temporalCoverage: { must: matches(/^\d{4}(-\d\d-\d\d)?(\/\d{4}-\d\d-\d\d)?$/) },
	spatialCoverage: { must: each(thing({ "@type": { must: is("Place") }, name: { must: text } })) },
	isAccessibleForFree: { must: is(true) },
	isBasedOn: { may: address },
	usageInfo: { must: address },
	license: { may: address },
	variableMeasured: {
		must: each(thing({ "@type": { must: is("PropertyValue") }, name: { must: text }, unitText: { may: text } })),
	},
	distribution: {
		must: each(
			thing({
				"@type": { must: is("DataDownload") },
				contentUrl: { must: address },
				encodingFormat: { must: matches(/^[a-z]+\/[a-z0-9.+-]+$/) },
				contentSize: { may: matches(/^\d+ B$/) },
				sha256: { may: matches(/^[0-9a-f]{64}$/) },
			}),
		),
	},
};

const iri = thing({ "@id": { must: matches(/^(https?|mailto):/) } });
const literal = (type: string, pattern: RegExp) =>
	thing({ "@type": { must: is(type) }, "@value": { must: matches(pattern) } });
const inLanguage = thing({ "@value": { must: text }, "@language": { must: matches(/^[a-z]{2}$/) } });
const dateTime = literal("xsd:dateTime", /^\d{4}-\d\d-\d\dT\d\d:\d\d:\d\d(\.\d+)?Z$/);
const date = literal("xsd:date", /^\d{4}-\d\d-\d\d$/);

/**
 * DCAT-US 3.0, classes Dataset, Distribution, Checksum, Kind, Agent, PeriodOfTime and Location, with the ranges of W3C DCAT 3: a data
 * set requires title, description and publisher, a contact fn and hasEmail, a checksum algorithm and value.
 */
export const dcatRules: Rules = {
	"@type": { must: is("dcat:Dataset") },
	"@id": { must: address },
	"dcterms:title": { must: inLanguage },
	"dcterms:description": { must: inLanguage },
	"dcterms:publisher": {
		must: thing({ "@type": { must: matches(/^foaf:(Agent|Organization)$/) }, "foaf:name": { must: text } }),
	},
	"dcterms:identifier": { must: text },
	"dcat:contactPoint": {
		must: thing({
			"@type": { must: matches(/^vcard:(Kind|Organization|Individual)$/) },
			"vcard:fn": { must: text },
			"vcard:hasEmail": { must: thing({ "@id": { must: matches(/^mailto:[^@\s]+@[^@\s]+$/) } }) },
		}),
	},
	"dcterms:issued": { must: dateTime },
	"dcterms:modified": { must: dateTime },
	"dcterms:temporal": {
		must: thing({
			"@type": { must: is("dcterms:PeriodOfTime") },
			"dcat:startDate": { must: date },
			"dcat:endDate": { must: date },
		}),
	},
	"dcterms:spatial": {
		must: each(thing({ "@type": { must: is("dcterms:Location") }, "skos:prefLabel": { must: text } })),
	},
	"dcterms:accrualPeriodicity": { must: iri },
	"dcat:version": { must: text },
	"dcat:previousVersion": { may: iri },
	"dcat:landingPage": { must: iri },
	"dcterms:rights": { must: iri },
	"dcterms:license": { may: iri },
	"dcat:distribution": {
		must: each(
			thing({
				"@type": { must: is("dcat:Distribution") },
				"dcat:downloadURL": { must: iri },
				"dcat:mediaType": {
					must: thing({ "@id": { must: matches(/^https:\/\/www\.iana\.org\/assignments\/media-types\//) } }),
				},
				"dcat:byteSize": { must: literal("xsd:nonNegativeInteger", /^\d+$/) },
				"spdx:checksum": {
					must: thing({
						"@type": { must: is("spdx:Checksum") },
						"spdx:algorithm": { must: thing({ "@id": { must: matches(/^spdx:checksumAlgorithm_/) } }) },
						"spdx:checksumValue": { must: literal("xsd:hexBinary", /^[0-9a-f]{64}$/) },
					}),
				},
			}),
		),
	},
};

/** Prefixes of a JSON-LD document that its own context does not spell out, in names and in types. */
export function unknownPrefixes(record: Record<string, unknown>): string[] {
	const known = new Set(Object.keys(record["@context"] as Record<string, string>));
	const used = new Set<string>();
	const visit = (value: unknown): void => {
		if (Array.isArray(value)) return value.forEach(visit);
		if (typeof value !== "object" || value === null) return;
		for (const [name, inner] of Object.entries(value)) {
			if (name === "@context") continue;
			if (!name.startsWith("@")) used.add(name.split(":")[0]!);
			if (name === "@type") used.add(String(inner).split(":")[0]!);
			visit(inner);
		}
	};
	visit(record);
	return [...used].filter((prefix) => !known.has(prefix));
}

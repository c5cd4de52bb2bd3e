import type { FileFacts } from "./release-files.server.ts";
import type { Release, ReleaseMeasure } from "./release.ts";

export type Catalogued = {
	release: Release;
	measures: readonly ReleaseMeasure[];
	files: readonly FileFacts[];
	/** Names of the states it covers. */
	places: readonly string[];
	language: "en" | "es";
	title: string;
	description: string;
	network: string;
	email: string;
	site: string;
	license: string | null;
	/** Address of the edition before this one. */
	previous: string | null;
};

const addressOf = ({ site, release }: Catalogued) => `${site}/data/${release.number}`;
const termsAddress = (told: Catalogued) => `${addressOf(told)}#terms`;
const fileAddress = ({ site, release }: Catalogued, name: string) =>
	`${site}/api/v1/releases/${release.number}/files/${name}`;
const plainType = (mediaType: string) => mediaType.split(";")[0]!;

/** A release in the words of schema.org, by which search engines find data sets. */
export function schemaOrgDataset(told: Catalogued): Record<string, unknown> {
	const { release, measures, files, places, language, title, description, network, site } = told;
	const organization = { "@type": "Organization", name: network, url: site };
	return {
		"@context": "https://schema.org",
		"@type": "Dataset",
		"@id": addressOf(told),
		url: addressOf(told),
		identifier: addressOf(told),
		name: title,
		description,
		inLanguage: language,
		version: String(release.number),
		datePublished: release.publishedAt,
		temporalCoverage: String(release.season),
		spatialCoverage: places.map((name) => ({ "@type": "Place", name })),
		creator: organization,
		publisher: organization,
		isAccessibleForFree: true,
		usageInfo: termsAddress(told),
		...(told.license && { license: told.license }),
		...(told.previous && { isBasedOn: told.previous }),
		variableMeasured: measures.map(({ key, label, unit }) => ({
			"@type": "PropertyValue",
			name: label[language],
			propertyID: key,
			unitText: unit,
		})),
		distribution: files.map(({ name, mediaType, byteCount, sha256 }) => ({
			"@type": "DataDownload",
			name,
			contentUrl: fileAddress(told, name),
			encodingFormat: plainType(mediaType),
			contentSize: `${byteCount} B`,
			sha256,
		})),
	};
}

/** The same as a DCAT-US 3 data set, for catalogues of governments; every term is spelt out, so no context is fetched. */
export function dcatDataset(told: Catalogued): Record<string, unknown> {
	const { release, files, places, language, title, description, network, email } = told;
	return {
		"@context": {
			dcat: "http://www.w3.org/ns/dcat#",
			dcterms: "http://purl.org/dc/terms/",
			foaf: "http://xmlns.com/foaf/0.1/",
			vcard: "http://www.w3.org/2006/vcard/ns#",
			skos: "http://www.w3.org/2004/02/skos/core#",
			spdx: "http://spdx.org/rdf/terms#",
			xsd: "http://www.w3.org/2001/XMLSchema#",
		},
		"@id": addressOf(told),
		"@type": "dcat:Dataset",
		"dcterms:title": { "@value": title, "@language": language },
		"dcterms:description": { "@value": description, "@language": language },
		"dcterms:identifier": addressOf(told),
		"dcterms:publisher": { "@type": "foaf:Organization", "foaf:name": network },
		"dcat:contactPoint": { "@type": "vcard:Kind", "vcard:fn": network, "vcard:hasEmail": { "@id": `mailto:${email}` } },
		"dcterms:issued": { "@value": release.publishedAt, "@type": "xsd:dateTime" },
		"dcterms:modified": { "@value": release.publishedAt, "@type": "xsd:dateTime" },
		"dcterms:temporal": {
			"@type": "dcterms:PeriodOfTime",
			"dcat:startDate": { "@value": `${release.season}-01-01`, "@type": "xsd:date" },
			"dcat:endDate": { "@value": `${release.season}-12-31`, "@type": "xsd:date" },
		},
		"dcterms:spatial": places.map((name) => ({ "@type": "dcterms:Location", "skos:prefLabel": name })),
		"dcterms:accrualPeriodicity": { "@id": "http://publications.europa.eu/resource/authority/frequency/ANNUAL" },
		"dcat:version": String(release.number),
		...(told.previous && { "dcat:previousVersion": { "@id": told.previous } }),
		"dcterms:rights": { "@id": termsAddress(told) },
		...(told.license && { "dcterms:license": { "@id": told.license } }),
		"dcat:landingPage": { "@id": addressOf(told) },
		"dcat:distribution": files.map((file) => distributionOf(told, file)),
	};
}

function distributionOf(told: Catalogued, { name, mediaType, byteCount, sha256 }: FileFacts) {
	return {
		"@type": "dcat:Distribution",
		"dcterms:title": name,
		"dcat:downloadURL": { "@id": fileAddress(told, name) },
		"dcat:mediaType": { "@id": `https://www.iana.org/assignments/media-types/${plainType(mediaType)}` },
		"dcat:byteSize": { "@value": String(byteCount), "@type": "xsd:nonNegativeInteger" },
		"spdx:checksum": {
			"@type": "spdx:Checksum",
			"spdx:algorithm": { "@id": "spdx:checksumAlgorithm_sha256" },
			"spdx:checksumValue": { "@value": sha256, "@type": "xsd:hexBinary" },
		},
	};
}

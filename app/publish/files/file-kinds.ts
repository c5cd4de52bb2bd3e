/** What each file of a release is, by its name; the words are `dataroom:fileAbout.<kind>`. */
const kinds: Record<string, string> = {
	"cells.csv": "cells",
	"measures.csv": "measures",
	"crops.csv": "crops",
	"areas.csv": "areas",
	"releases.csv": "releases",
	"table.csv": "laidOut",
	"csv-metadata.json": "csvMetadata",
	"datapackage.json": "dataPackage",
	"cells.sdmx.csv": "sdmx",
	"sdmx-structure.json": "sdmxStructure",
	"counties.geojson": "counties",
	"districts.geojson": "districts",
	"states.geojson": "states",
	"region.geojson": "region",
	"cells.parquet": "parquet",
	"cells.xlsx": "workbook",
	"codebook.json": "codebook",
	"codebook.csv": "codebookTable",
	SHA256SUMS: "checksums",
};

export const fileKindOf = (name: string): string => (name.endsWith(".zip") ? "archive" : (kinds[name] ?? "other"));

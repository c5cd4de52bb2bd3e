/**
 * What the texts of Data Package, Data Resource and Table Schema 2.0 (datapackage.org, 2024) demand of a descriptor of
 * tables, as JSON Schema. Written from their sections "Properties" and "Field types"; of the types only those we use.
 */
const name = { type: "string", minLength: 1 };
/** "A POSIX path, relative, without `..` and not starting with a dot, slash or tilde", or an address. */
const path = { type: "string", pattern: "^(https?://.+|(?![./~])(?!.*(^|/)\\.\\.(/|$))(?!.*:)[^\\\\]+)$" };

const field = {
	type: "object",
	required: ["name"],
	properties: {
		name,
		type: { enum: ["string", "number", "integer", "boolean", "date", "datetime", "year", "any"] },
		description: { type: "string" },
		constraints: {
			type: "object",
			properties: { required: { type: "boolean" }, unique: { type: "boolean" }, pattern: { type: "string" } },
			additionalProperties: false,
		},
		categories: {
			type: "array",
			minItems: 1,
			items: {
				anyOf: [
					{ type: "string" },
					{ type: "object", required: ["value"], properties: { value: { type: "string" }, label: { type: "string" } } },
				],
			},
		},
	},
};

const schema = {
	type: "object",
	required: ["fields"],
	properties: {
		fields: { type: "array", minItems: 1, items: field },
		missingValues: { type: "array", items: { type: "string" } },
		primaryKey: { type: "array", minItems: 1, items: name },
		foreignKeys: {
			type: "array",
			items: {
				type: "object",
				required: ["fields", "reference"],
				properties: {
					fields: { type: "array", minItems: 1, items: name },
					reference: {
						type: "object",
						required: ["fields"],
						properties: { resource: { type: "string" }, fields: { type: "array", minItems: 1, items: name } },
					},
				},
			},
		},
	},
};

const resource = {
	type: "object",
	required: ["name", "path"],
	not: { required: ["data"] },
	properties: {
		name,
		path,
		type: { const: "table" },
		title: { type: "string" },
		format: { type: "string" },
		mediatype: { type: "string", pattern: "^(.+)/(.+)$" },
		encoding: { type: "string" },
		bytes: { type: "integer" },
		hash: { type: "string", pattern: "^([^:]+:[a-fA-F0-9]+|[a-fA-F0-9]{32})$" },
		schema,
	},
};

export const dataPackageProfile = {
	$schema: "http://json-schema.org/draft-07/schema#",
	type: "object",
	required: ["resources"],
	properties: {
		$schema: { const: "https://datapackage.org/profiles/2.0/datapackage.json" },
		name,
		id: { type: "string" },
		title: { type: "string" },
		description: { type: "string" },
		homepage: { type: "string", format: "uri" },
		version: { type: "string" },
		created: { type: "string", format: "date-time" },
		resources: { type: "array", minItems: 1, items: resource },
	},
};

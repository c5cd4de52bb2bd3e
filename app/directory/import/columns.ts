import { z } from "zod";
import { plainText } from "#app/lib/closeness.ts";

/** What a list can tell of a grower, in the order in which it is asked for. */
export const importFields = [
	"name",
	"contactName",
	"ownerName",
	"email",
	"phone",
	"county",
	"state",
	"language",
	"crop",
	"cultivar",
	"bearingTrees",
	"youngTrees",
	"area",
	"plantedYear",
] as const;
export type ImportField = (typeof importFields)[number];
/** Which column holds what; a field without a column is not told. */
export type Columns = Partial<Record<ImportField, number>>;

/** How people head such columns, in both languages, as `plainText` leaves them. */
const headings: Record<ImportField, string> = {
	name: "operation, operation name, farm, farm name, orchard, orchard name, business, business name, company, name of operation, name of farm, finca, nombre de la finca, huerta, huerto, granja, rancho, empresa, nombre del huerto, operacion, negocio",
	contactName:
		"contact, contact name, contact person, grower, grower name, name, person, full name, contacto, nombre, nombre del contacto, persona, productor, nombre del productor, nombre completo",
	ownerName: "owner, owner name, proprietor, dueno, nombre del dueno, propietario, duena",
	email: "email, e mail, mail, email address, e mail address, correo, correo electronico, direccion de correo",
	phone:
		"telephone, phone, tel, phone number, telephone number, mobile, cell, cell phone, telefono, numero de telefono, celular, movil",
	county: "county, county name, fips, county fips, condado, nombre del condado",
	state: "state, st, state name, estado",
	language: "language, lang, preferred language, idioma, lengua, idioma preferido",
	crop: "crop, fruit, crop name, cultivo, fruta",
	cultivar: "cultivar, variety, cultivar or variety, variedad",
	bearingTrees:
		"bearing trees, trees, bearing, trees bearing, bearing trees or bushes, number of trees, plants, arboles, arboles en produccion, numero de arboles, plantas, en produccion, arboles o arbustos en produccion",
	youngTrees:
		"young trees, nonbearing trees, non bearing trees, young, young trees or bushes, arboles jovenes, jovenes, arboles o arbustos jovenes",
	area: "area, acres, area acres, acreage, hectares, ha, size, superficie, hectareas, acre",
	plantedYear: "year planted, planted, planting year, year, ano de plantacion, plantado, ano, plantada",
};
const fieldOf = new Map(
	Object.entries(headings).flatMap(([field, words]) =>
		words.split(", ").map((word): [string, ImportField] => [word, field as ImportField]),
	),
);

/** The columns that a header seems to name, each field by its first. Where no operation is named, its contact's name is it. */
export function guessColumns(header: readonly string[]): Columns {
	const columns: Columns = {};
	for (const [index, heading] of header.entries()) {
		const field = fieldOf.get(plainText(heading));
		if (field !== undefined && columns[field] === undefined) columns[field] = index;
	}
	if (columns.name === undefined && columns.contactName !== undefined) columns.name = columns.contactName;
	return columns;
}

const column = z.coerce.number().int().min(0).optional();
/** How a file is read: which column holds what, and what goes for all of its rows. */
export const ImportChoices = z.object({
	columns: z.object({
		...(Object.fromEntries(importFields.map((field) => [field, column])) as Record<ImportField, typeof column>),
		name: z.coerce.number({ error: "column_needed" }).int().min(0),
		county: z.coerce.number({ error: "column_needed" }).int().min(0),
	}),
	/** How its numbers and words are written. */
	written: z.enum(["en", "es"], "choice_wrong"),
	/** For growers of whom it tells no language. */
	language: z.enum(["en", "es"], "choice_wrong"),
	areaUnit: z.enum(["acre", "ha"], "choice_wrong"),
	/** In which weight new growers are asked. */
	massUnit: z.string().max(20),
});
export type ImportChoices = z.infer<typeof ImportChoices>;

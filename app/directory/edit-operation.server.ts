import { sql } from "kysely";
import { logEvent } from "#app/auth/event-log.server.ts";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { findCounty } from "./areas.server.ts";
import { findOperation } from "./operations.server.ts";

/** What an associate may write down of an operation; its address for mail, its plantings and its wishes have ways of their own. */
export type OperationEdit = {
	name: string;
	contactName: string;
	phone: string | null;
	countyFips: string;
	language: "en" | "es";
	massUnit: string;
};

/**
 * Writes down what an associate has learnt of an operation. Another county moves it there, within the viewer's states;
 * surveys that have opened keep the county of their frozen frame.
 */
export async function editOperation(
	trx: Trx,
	viewer: Associate,
	operationId: string,
	edit: OperationEdit,
): Promise<"edited" | "unchanged" | "not_found" | "unknown_county"> {
	const operation = await findOperation(trx, viewer, operationId);
	if (!operation || operation.status !== "active") return "not_found";
	const county = await findCounty(trx, edit.countyFips);
	if (!county || !viewer.stateFips.includes(county.state_fips)) return "unknown_county";
	const fields = Object.keys(edit).filter(
		(field) => edit[field as keyof OperationEdit] !== operation[field as keyof OperationEdit],
	);
	if (fields.length === 0) return "unchanged";
	await trx
		.updateTable("directory.operation")
		.set({ name: edit.name, contact_name: edit.contactName, phone: edit.phone, language: edit.language })
		.set({ mass_unit: edit.massUnit, county_fips: county.county_fips, state_fips: county.state_fips })
		.set({ updated_at: sql`now()` })
		.where("operation_id", "=", operationId)
		.execute();
	await logEvent(trx, {
		personId: viewer.personId,
		action: "operation.edited",
		subjectKind: "operation",
		subjectId: operationId,
		stateFips: county.state_fips,
		detail: { fields },
	});
	return "edited";
}

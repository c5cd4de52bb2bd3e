import { sql } from "kysely";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Grower } from "#app/auth/viewer.ts";
import { findOwnOperation } from "./own-operation.server.ts";

/** How a grower is reached, and in which words and units. */
export type OwnSettings = {
	contactName: string;
	email: string | null;
	phone: string | null;
	language: "en" | "es";
	/** One of the units of weight that the survey forms know. */
	massUnit: string;
	/** Whether invitations, reminders and thank-yous are sent; a receipt is sent in either case. */
	mailWanted: boolean;
};

export async function findOwnSettings(trx: Trx, viewer: Grower, operationId: string) {
	const operation = await findOwnOperation(trx, viewer, operationId);
	if (!operation) return undefined;
	const row = await trx
		.selectFrom("directory.operation")
		.select(["contact_name", "email", "phone", "language", "mass_unit", "mail_wanted", "mail_returned_at"])
		.where("operation_id", "=", operationId)
		.executeTakeFirstOrThrow();
	const settings: OwnSettings = {
		contactName: row.contact_name,
		email: row.email,
		phone: row.phone,
		language: row.language === "es" ? "es" : "en",
		massUnit: row.mass_unit,
		mailWanted: row.mail_wanted,
	};
	return { operation, settings, mailReturned: row.mail_returned_at !== null };
}

/** Saves a grower's settings. `address_mended` says that mail can be tried again which came back from the former address. */
export async function saveOwnSettings(
	trx: Trx,
	viewer: Grower,
	operationId: string,
	settings: OwnSettings,
): Promise<"saved" | "address_mended" | "not_found"> {
	const standing = await findOwnSettings(trx, viewer, operationId);
	if (!standing) return "not_found";
	await trx
		.updateTable("directory.operation")
		.set({
			contact_name: settings.contactName,
			email: settings.email,
			phone: settings.phone,
			language: settings.language,
			mass_unit: settings.massUnit,
			mail_wanted: settings.mailWanted,
			updated_at: sql`now()`,
		})
		.where("operation_id", "=", operationId)
		.execute();
	return settings.email !== standing.settings.email ? "address_mended" : "saved";
}

import type { RouterContextProvider } from "react-router";
import { requireOrchard } from "#app/auth/guard.server.ts";
import { findOwnOperation } from "#app/directory/own-operation.server.ts";
import { refusal } from "#app/lib/refusal.ts";
import { todayIn } from "./answering.server.ts";

/**
 * A signed-in grower's own operation, with the day it is there.
 * @throws refusal 401 or 403 for who may not, 404 for another's operation.
 */
export async function getOwnOperation(context: Readonly<RouterContextProvider>, operationId: string) {
	const grower = requireOrchard(context);
	const operation = await grower.transaction((trx) => findOwnOperation(trx, grower.viewer, operationId));
	if (!operation) throw refusal("orchard_not_found");
	return { ...operation, today: todayIn(operation.timeZone) };
}

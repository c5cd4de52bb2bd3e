import { forgetGrantees } from "#app/auth/forgetting.server.ts";
import { type Trx, underScope } from "#app/auth/scope.server.ts";
import type { Grower } from "#app/auth/viewer.ts";
import { forgetAnswers } from "#app/collect/forgetting.server.ts";
import { forgetOperation, forgetOwner, lockOwnOperation } from "#app/directory/leaving.server.ts";

/**
 * A grower's own operation leaves and is forgotten, all of it or nothing.
 * @returns the people who are forgotten with it.
 */
export async function leave(
	trx: Trx,
	viewer: Grower,
	operationId: string,
): Promise<"not_found" | { people: string[] }> {
	const operation = await lockOwnOperation(trx, viewer, operationId);
	if (!operation) return "not_found";
	await forgetAnswers(trx, viewer, operationId);
	await forgetOperation(trx, operation);
	await underScope(trx, { kind: "network" }, () => forgetOwner(trx, operationId));
	return { people: await forgetGrantees(trx, operationId) };
}

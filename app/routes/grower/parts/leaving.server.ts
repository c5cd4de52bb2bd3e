import { forgetGrantees } from "#app/auth/forgetting.server.ts";
import { type Trx, underScope } from "#app/auth/scope.server.ts";
import type { Grower } from "#app/auth/viewer.ts";
import { forgetAnswers } from "#app/collect/forgetting.server.ts";
import { forgetFindings } from "#app/review/forgetting.server.ts";
import { forgetOperation, forgetOwner, freeMergedInto, lockOwnOperation } from "#app/directory/leaving.server.ts";

/**
 * A grower's own operation leaves and is forgotten, all of it or nothing; so is whatever was merged into it.
 * @returns the people who are forgotten with it.
 */
export async function leave(
	trx: Trx,
	viewer: Grower,
	operationId: string,
): Promise<"not_found" | { people: string[] }> {
	const operation = await lockOwnOperation(trx, viewer, operationId);
	if (!operation) return "not_found";
	const duplicates = await underScope(trx, { kind: "network" }, () => freeMergedInto(trx, operationId));
	const operationIds = [...viewer.operationIds, ...duplicates.map((one) => one.operationId)];
	await underScope(trx, { kind: "grower", operationIds }, async () => {
		for (const one of [operation, ...duplicates]) {
			await forgetAnswers(trx, { ...viewer, operationIds }, one.operationId);
			await forgetFindings(trx, one.operationId);
			await forgetOperation(trx, one);
		}
	});
	const people = [];
	for (const one of [operation, ...duplicates]) {
		await underScope(trx, { kind: "network" }, () => forgetOwner(trx, one.operationId));
		people.push(...(await forgetGrantees(trx, one.operationId)));
	}
	return { people };
}

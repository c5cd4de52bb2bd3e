import { createHash } from "node:crypto";
import { z } from "zod";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { answeredCondition } from "#app/collect/last-answers.server.ts";
import { OperationQuery } from "#app/directory/operation.schema.ts";
import { listByIds, listMatchingIds, listOperations } from "#app/directory/operation-list.server.ts";

const Which = z.enum(["ticked", "page", "matching"]).catch("ticked");
const Ids = z.array(z.guid()).catch([]);

/** Which growers an address means: `?which=ticked&id=…&id=…`, or with the list's own parts, its page or all that match. */
export function readChoice(address: string) {
	const { searchParams } = new URL(address);
	return {
		which: Which.parse(searchParams.get("which")),
		ids: Ids.parse(searchParams.getAll("id")),
		query: OperationQuery.parse(Object.fromEntries(searchParams)),
	};
}
type Choice = ReturnType<typeof readChoice>;

/** The growers of a choice that the viewer sees, and a mark by which one sees whether they are still the same. */
export async function listChosen(trx: Trx, viewer: Associate, { which, ids, query }: Choice) {
	const narrowing = answeredCondition(query.answered);
	const wanted = which === "matching" ? await listMatchingIds(trx, viewer, query, narrowing) : ids;
	const rows =
		which === "page"
			? (await listOperations(trx, viewer, query, narrowing)).rows
			: await listByIds(trx, viewer, [...new Set(wanted)]);
	const operationIds = rows.map(({ operationId }) => operationId);
	const mark = createHash("sha256").update(operationIds.toSorted().join()).digest("hex").slice(0, 16);
	return { rows, operationIds, mark };
}

import { sql } from "kysely";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { queueMail } from "#app/collect/mail-waves.server.ts";
import { isId } from "#app/collect/surveys.server.ts";
import { lockForDecision, noteAsked } from "#app/review/decisions.server.ts";
import { findFinding } from "#app/review/findings.server.ts";
import type { FindingPlace } from "./decide.server.ts";

/** Why no question is mailed: each has words at `checks:ask.refused.<code>`. */
export type AskRefused = "no_address" | "not_wanted" | "returned" | "left";

/**
 * Queues one mail that asks the grower whether the odd answer is right. Once a finding: pressed twice, by one or by two,
 * it sends one.
 */
export async function askGrower(
	trx: Trx,
	viewer: Associate,
	{ surveyId, findingId }: FindingPlace,
	version: number,
): Promise<"done" | "not_found" | "changed" | AskRefused> {
	const seen = isId(findingId) ? await findFinding(trx, viewer, surveyId, findingId) : undefined;
	if (!seen) return "not_found";
	await lockForDecision(trx, surveyId, seen.responseId);
	const finding = await findFinding(trx, viewer, surveyId, findingId);
	if (!finding) return "not_found";
	if (finding.askedAt) return "done";
	if (finding.outcome !== null || finding.version !== version) return "changed";
	const refused = await reasonNotToAsk(trx, finding.operationId);
	if (refused) return refused;
	const { mailing_id: mailingId } = await trx
		.insertInto("collect.mailing")
		.columns(["survey_id", "operation_id", "kind", "wave", "queued_by"])
		.expression((eb) =>
			eb
				.selectFrom("collect.mailing as m")
				.where("m.survey_id", "=", surveyId)
				.where("m.operation_id", "=", finding.operationId)
				.where("m.kind", "=", "question")
				.select([
					sql<string>`${surveyId}::uuid`.as("survey_id"),
					sql<string>`${finding.operationId}::uuid`.as("operation_id"),
					sql<string>`'question'`.as("kind"),
					sql<number>`coalesce(max(m.wave), 0) + 1`.as("wave"),
					sql<string>`${viewer.personId}::uuid`.as("queued_by"),
				]),
		)
		.returning("mailing_id")
		.executeTakeFirstOrThrow();
	await noteAsked(trx, viewer, finding, mailingId);
	await queueMail(trx, mailingId);
	return "done";
}

async function reasonNotToAsk(trx: Trx, operationId: string): Promise<AskRefused | null> {
	const operation = await trx
		.selectFrom("directory.operation")
		.where("operation_id", "=", operationId)
		.select(["email", "status", "mail_wanted", "mail_returned_at"])
		.executeTakeFirstOrThrow();
	if (operation.status !== "active") return "left";
	if (!operation.email) return "no_address";
	if (operation.mail_returned_at) return "returned";
	return operation.mail_wanted ? null : "not_wanted";
}

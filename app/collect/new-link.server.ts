import { sql } from "kysely";
import { logEvent } from "#app/auth/event-log.server.ts";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { answered, lastWave, queueMail } from "./mail-waves.server.ts";
import { replacePersonalLinks } from "./personal-link.server.ts";
import { markReachable } from "./reach.server.ts";
import { findSurvey, isId } from "./surveys.server.ts";

/** Why no new link is sent: each has words at `desk:grower.refused.<code>`. */
export type LinkRefused =
	"not_open" | "already_answered" | "left" | "withdrew" | "refused" | "not_eligible" | "no_address" | "not_wanted";

/**
 * Sends one operation a new personal link; links sent before stop working at once. Who has refused, taken back an answer
 * or left is not written to again. An address that took no mail is tried anew: that is what the press asks for.
 * @param wave the wave the page counted for this operation: pressed twice, the second changes nothing.
 */
export async function sendNewLink(trx: Trx, viewer: Associate, surveyId: string, operationId: string, wave: number) {
	const survey = await findSurvey(trx, viewer, surveyId);
	if (!survey || !isId(operationId)) return "not_found" as const;
	const asked = await findAsked(trx, viewer, surveyId, operationId);
	if (!asked) return "not_found" as const;
	const refused: LinkRefused | null = survey.state === "open" ? reasonToRefuse(asked) : "not_open";
	if (refused) return refused;
	const last = await lastWave(trx, surveyId, "invitation", operationId);
	if (!Number.isInteger(wave) || wave < 1 || wave > last + 1) return "not_found" as const;

	const mailing = await trx
		.insertInto("collect.mailing")
		.values({ survey_id: surveyId, operation_id: operationId, kind: "invitation", wave, queued_by: viewer.personId })
		.onConflict((conflict) => conflict.constraint("mailing_once").doNothing())
		.returning("mailing_id")
		.executeTakeFirst();
	if (!mailing) return { queued: 0, name: asked.name };
	await replacePersonalLinks(trx, { surveyId, operationId });
	await markReachable(trx, operationId);
	await queueMail(trx, mailing.mailing_id);
	await logEvent(trx, {
		personId: viewer.personId,
		action: "survey.link_replaced",
		subjectKind: "operation",
		subjectId: operationId,
		stateFips: asked.stateFips,
		detail: { surveyId },
	});
	return { queued: 1, name: asked.name };
}

function findAsked(trx: Trx, viewer: Associate, surveyId: string, operationId: string) {
	return trx
		.selectFrom("collect.frame_operation as f")
		.innerJoin("directory.operation as o", "o.operation_id", "f.operation_id")
		.leftJoin("collect.response as r", (join) =>
			join.onRef("r.survey_id", "=", "f.survey_id").onRef("r.operation_id", "=", "f.operation_id"),
		)
		.where("f.survey_id", "=", surveyId)
		.where("f.operation_id", "=", operationId)
		.where("f.state_fips", "in", viewer.stateFips)
		.select([
			"o.email",
			"o.mail_wanted as mailWanted",
			"o.name",
			"o.status",
			"f.state_fips as stateFips",
			"f.disposition",
			"r.withdrawn_at as withdrawnAt",
			sql<boolean>`${answered}`.as("answered"),
		])
		.executeTakeFirst();
}

function reasonToRefuse(asked: NonNullable<Awaited<ReturnType<typeof findAsked>>>): LinkRefused | null {
	if (asked.answered) return "already_answered";
	if (asked.status === "left") return "left";
	if (asked.withdrawnAt) return "withdrew";
	if (asked.disposition === "refused" || asked.disposition === "not_eligible") return asked.disposition;
	if (!asked.email) return "no_address";
	if (!asked.mailWanted) return "not_wanted";
	return null;
}

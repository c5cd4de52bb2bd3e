import { createHash, randomBytes } from "node:crypto";
import { setSurveyInHand, type Trx } from "#app/auth/scope.server.ts";

export type NewPersonalLink = { surveyId: string; operationId: string; mailingId?: string; expiresAt: Date };
/** What a link opens; nothing of it is told to whoever holds a token that opens nothing. */
export type FoundLink = {
	personalLinkId: string;
	surveyId: string;
	operationId: string;
	/** The operation's own language, for a visitor who has not chosen one. */
	language: "en" | "es";
	season: number;
	title: { en: string; es: string };
	operationName: string;
	countyName: string;
};

/**
 * Makes a link to one operation's answers in one survey and returns its token: 256 random bits, stored only as a hash, so
 * that a stolen table opens nothing. The token is told once; nobody can read it again.
 */
export async function createPersonalLink(trx: Trx, link: NewPersonalLink): Promise<string> {
	const token = randomBytes(32).toString("base64url");
	await trx
		.insertInto("collect.personal_link")
		.values({
			survey_id: link.surveyId,
			operation_id: link.operationId,
			mailing_id: link.mailingId ?? null,
			token_hash: hashOf(token),
			expires_at: link.expiresAt,
		})
		.execute();
	return token;
}

/** Ends every link of an operation to a survey, and with them the sessions they opened. */
export async function replacePersonalLinks(
	trx: Trx,
	{ surveyId, operationId }: { surveyId: string; operationId: string },
): Promise<void> {
	await trx
		.updateTable("collect.personal_link")
		.set({ replaced_at: new Date() })
		.where("survey_id", "=", surveyId)
		.where("operation_id", "=", operationId)
		.where("replaced_at", "is", null)
		.execute();
}

/**
 * The link of a token, when it can be used: known, not expired, not replaced, its survey open. All other tokens give the
 * same undefined. Looks only: mail scanners open links too.
 * @param trx under scope `network`, as nobody is known yet.
 */
export async function findLink(trx: Trx, token: string): Promise<FoundLink | undefined> {
	// A token of another length cannot be ours; the query would only say so later.
	if (!/^[A-Za-z0-9_-]{43}$/.test(token)) return undefined;
	const now = new Date();
	const known = await trx
		.selectFrom("collect.personal_link")
		.select("survey_id")
		.where("token_hash", "=", hashOf(token))
		.executeTakeFirst();
	if (!known) return undefined;
	await setSurveyInHand(trx, known.survey_id);
	const row = await trx
		.selectFrom("collect.personal_link as link")
		.innerJoin("collect.survey as survey", "survey.survey_id", "link.survey_id")
		.innerJoin("directory.operation as operation", "operation.operation_id", "link.operation_id")
		.innerJoin("directory.county as county", "county.county_fips", "operation.county_fips")
		.select([
			"link.personal_link_id as personalLinkId",
			"link.survey_id as surveyId",
			"link.operation_id as operationId",
			"operation.language",
			"survey.season",
			"survey.title",
			"operation.name as operationName",
			"county.name as countyName",
		])
		.where("link.token_hash", "=", hashOf(token))
		.where("link.expires_at", ">", now)
		.where("link.replaced_at", "is", null)
		.where("survey.opened_at", "is not", null)
		.where("survey.closed_at", "is", null)
		.where("survey.closes_at", ">", now)
		.executeTakeFirst();
	return row as FoundLink | undefined;
}

/** Notes that a link was used, once; called when its button was pressed, never when it was only looked at. */
export async function markOpened(trx: Trx, personalLinkId: string): Promise<void> {
	await trx
		.updateTable("collect.personal_link")
		.set({ first_opened_at: new Date() })
		.where("personal_link_id", "=", personalLinkId)
		.where("first_opened_at", "is", null)
		.execute();
}

/** A name told in part, for a page that a forwarded link could show to anyone: "Tallow Hill Orchard" is "T… H… Orchard". */
export function partOf(name: string): string {
	const words = name.trim().split(/\s+/);
	const shown = words.map((word, at) => (at > 0 && at === words.length - 1 ? word : `${[...word][0] ?? ""}…`));
	return shown.join(" ");
}

function hashOf(token: string): string {
	return createHash("sha256").update(token).digest("base64url");
}

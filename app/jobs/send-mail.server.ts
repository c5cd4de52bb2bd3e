import { createPersonalLink } from "#app/collect/personal-link.server.ts";
import {
	findMailing,
	type Mailing,
	markMailingFailed,
	markMailingSent,
	markMailingTried,
	reasonNotToSend,
	takeMailing,
} from "#app/collect/survey-mailing.server.ts";
import { openQuestion } from "#app/review/edit-question.server.ts";
import { scopedTransaction, type Trx } from "#app/auth/scope.server.ts";
import { env } from "#app/lib/env.server.ts";
import { type OutgoingMail, sendMail as deliver, type SendOutcome } from "#app/mail/transport.server.ts";
import { composeMail } from "./compose-mail.server.ts";

const network = { kind: "network" } as const;

/**
 * Sends one mailing at most once. That the server is about to get it is committed before it does: a process that dies
 * before it could note the answer leaves a mailing of which nobody knows whether it arrived, and that one is given up as
 * `uncertain` for the desk to see, and never sent again by itself. Where the server surely took nothing, this throws, and
 * the queue tries again with growing pauses.
 * @param lastTry the queue gives up after this one.
 */
export async function sendMail({ mailingId }: { mailingId: string }, lastTry = false): Promise<void> {
	await scopedTransaction(network, async (lock) => {
		if (!(await takeMailing(lock, mailingId))) return;
		const prepared = await scopedTransaction(network, (trx) => prepare(trx, mailingId));
		if (!prepared) return;
		await handOver(prepared.mailing, await composeMail(prepared.mailing, prepared.link), lastTry);
	});
}

/** Decides whether the mailing still goes, and makes its personal link: only the link's hash is kept. */
async function prepare(trx: Trx, mailingId: string): Promise<{ mailing: Mailing; link: string | null } | null> {
	const mailing = await findMailing(trx, mailingId);
	if (!mailing || mailing.sent_at || mailing.failed_at) return null;
	const reason = mailing.tried_at ? "uncertain" : reasonNotToSend(mailing);
	if (reason) {
		await markMailingFailed(trx, mailing, reason);
		return null;
	}
	if (mailing.kind === "question") return prepareQuestion(trx, mailing);
	if (mailing.kind !== "invitation" && mailing.kind !== "reminder") return { mailing, link: null };
	// Committed before the mail server hears of it: a link in a grower's hands always works. It stands beside the links of
	// earlier mails, which work on until the survey closes or somebody asks for a new one.
	const { survey_id: surveyId, operation_id: operationId, closes_at: expiresAt } = mailing;
	const token = await createPersonalLink(trx, { surveyId, operationId, mailingId, expiresAt });
	return { mailing, link: `${env().BASE_URL}/r/${token}` };
}

/** Its link opens one question about one answer, and no survey. */
async function prepareQuestion(trx: Trx, mailing: Mailing): Promise<{ mailing: Mailing; link: string } | null> {
	const token = await openQuestion(trx, mailing.mailing_id);
	if (token) return { mailing, link: `${env().BASE_URL}/check/${token}` };
	await markMailingFailed(trx, mailing, "decided");
	return null;
}

async function handOver(mailing: Mailing, mail: OutgoingMail, lastTry: boolean): Promise<void> {
	const { mailing_id: id } = mailing;
	await scopedTransaction(network, (trx) => markMailingTried(trx, id, true));
	let outcome: SendOutcome;
	try {
		outcome = await deliver(mail);
	} catch (error) {
		await scopedTransaction(network, (trx) =>
			lastTry ? markMailingFailed(trx, mailing, "server_away") : markMailingTried(trx, id, false),
		);
		throw error;
	}
	await scopedTransaction(network, (trx) =>
		outcome === "sent" ? markMailingSent(trx, id, mail.messageId) : markMailingFailed(trx, mailing, outcome),
	);
}

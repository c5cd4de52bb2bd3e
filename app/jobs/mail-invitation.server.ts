import { findLetter, makeLink, markLetter } from "#app/auth/accepting.server.ts";
import { scopedTransaction, type Trx } from "#app/auth/scope.server.ts";
import { readNetworkClock } from "#app/auth/network-clock.server.ts";
import type { InvitedRole } from "#app/auth/invitations.server.ts";
import { isLanguage } from "#app/i18n/language.ts";
import { env } from "#app/lib/env.server.ts";
import { formatterFor } from "#app/lib/format.ts";
import { writeInvitationLetter } from "#app/mail/desk-letters.ts";
import { asHtml, asText } from "#app/mail/letter.ts";
import { messageIdOf, sendMail as deliver, senderName } from "#app/mail/transport.server.ts";
import { mailWords } from "#app/mail/words.server.ts";
import { queueJob } from "./queue.server.ts";

const none = { kind: "none" } as const;

/** Queues the letter of an invitation in the transaction that decides it. */
export function queueInvitation(trx: Trx, invitationId: string): Promise<void> {
	return queueJob(trx, "mail_invitation", { invitationId }, { jobKey: `mail_invitation:${invitationId}` });
}

/**
 * Sends an invitation's letter. Its link is committed before the mail server hears of it, so that one in somebody's hands
 * works; where the server surely took nothing, the next try makes another. @param lastTry the queue gives up after this one.
 */
export async function mailInvitation({ invitationId }: { invitationId: string }, lastTry = false): Promise<void> {
	const prepared = await scopedTransaction(none, async (trx) => {
		const letter = await findLetter(trx, invitationId);
		if (!letter) return undefined;
		const { timeZone } = await readNetworkClock(trx);
		return { ...letter, timeZone, token: await makeLink(trx, invitationId) };
	});
	if (!prepared) return;
	const { email, token, timeZone } = prepared;
	const language = isLanguage(prepared.language) ? prepared.language : "en";
	const t = await mailWords(language);
	const format = formatterFor(language, t);
	const letter = writeInvitationLetter(
		{
			language,
			network: senderName(),
			role: prepared.role as InvitedRole,
			stateFips: prepared.stateFips,
			inviter: prepared.invitedBy,
			endsOn: prepared.endsOn && format.day(prepared.endsOn),
			until: format.moment(prepared.expiresAt, timeZone),
			link: `${env().BASE_URL}/invitation/${token}`,
		},
		t,
	);
	try {
		const outcome = await deliver({
			to: { name: "", address: email },
			subject: letter.subject,
			text: asText(letter),
			html: asHtml(letter),
			language,
			messageId: messageIdOf(`${invitationId}.${prepared.expiresAt.getTime()}`),
			stopAddress: null,
		});
		await scopedTransaction(none, (trx) => markLetter(trx, token, outcome));
	} catch (error) {
		if (lastTry) await scopedTransaction(none, (trx) => markLetter(trx, token, "server_away"));
		throw error;
	}
}

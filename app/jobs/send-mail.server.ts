import { createPersonalLink } from "#app/collect/personal-link.server.ts";
import {
	findMailing,
	lockUnsentMailing,
	type Mailing,
	markMailingFailed,
	markMailingSent,
	reasonNotToSend,
} from "#app/collect/survey-mailing.server.ts";
import { scopedTransaction } from "#app/auth/scope.server.ts";
import { wordsIn } from "#app/i18n/language.ts";
import { env } from "#app/lib/env.server.ts";
import { formatterFor } from "#app/lib/format.ts";
import { asHtml, asText } from "#app/mail/letter.ts";
import { writeLetter } from "#app/mail/templates.ts";
import { messageIdOf, sendMail as deliver, senderName } from "#app/mail/transport.server.ts";
import { mailWords } from "#app/mail/words.server.ts";

/**
 * Sends one mailing once. Its personal link is made and committed before the mail server hears of it, and only its hash is
 * kept: a link in a grower's hands always works, and a second try makes another beside it. The mailing stays locked
 * while the server answers, so that two workers cannot both send it. What may be better later throws, and the queue
 * tries again with growing pauses.
 */
export async function sendMail({ mailingId }: { mailingId: string }): Promise<void> {
	const prepared = await scopedTransaction({ kind: "network" }, async (trx) => {
		const mailing = await findMailing(trx, mailingId);
		if (!mailing || mailing.sent_at || mailing.failed_at) return null;
		const reason = reasonNotToSend(mailing);
		if (reason) {
			await markMailingFailed(trx, mailing, reason);
			return null;
		}
		if (mailing.kind === "receipt") return { mailing, link: null };
		const { survey_id: surveyId, operation_id: operationId, closes_at: expiresAt } = mailing;
		const token = await createPersonalLink(trx, { surveyId, operationId, mailingId, expiresAt });
		return { mailing, link: `${env().BASE_URL}/r/${token}` };
	});
	if (!prepared) return;

	const mail = await composeMail(prepared.mailing, prepared.link);
	await scopedTransaction({ kind: "network" }, async (trx) => {
		if (!(await lockUnsentMailing(trx, mailingId))) return;
		const outcome = await deliver(mail);
		if (outcome === "sent") await markMailingSent(trx, mailingId, mail.messageId);
		else await markMailingFailed(trx, prepared.mailing, "returned");
	});
}

/** A mailing as it goes out, in the language the grower answers in, or is known to read. */
export async function composeMail(mailing: Mailing, link: string | null) {
	const language = (mailing.response_language ?? mailing.language) === "es" ? "es" : "en";
	const t = await mailWords(language);
	const letter = writeLetter(
		{
			kind: mailing.kind,
			language,
			network: senderName(),
			contactName: mailing.contact_name,
			operationName: mailing.operation_name,
			surveyTitle: wordsIn(mailing.title, language),
			season: mailing.season,
			minutes: mailing.minutes,
			closesAt: mailing.closes_at,
			timeZone: mailing.time_zone,
			link,
			receipt:
				mailing.receipt_code && mailing.submitted_at
					? { code: mailing.receipt_code, submittedAt: mailing.submitted_at }
					: null,
		},
		t,
		formatterFor(language, t),
	);
	return {
		to: { name: mailing.contact_name, address: mailing.email ?? "" },
		subject: letter.subject,
		text: asText(letter),
		html: asHtml(letter),
		language,
		messageId: messageIdOf(mailing.mailing_id),
	};
}

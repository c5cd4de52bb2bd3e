import type { Mailing } from "#app/collect/survey-mailing.server.ts";
import { wordsIn } from "#app/i18n/language.ts";
import { env } from "#app/lib/env.server.ts";
import { formatterFor } from "#app/lib/format.ts";
import { asHtml, asText } from "#app/mail/letter.ts";
import { stopAddressOf } from "#app/mail/stop-token.server.ts";
import { writeLetter } from "#app/mail/templates.ts";
import { messageIdOf, type OutgoingMail, senderName } from "#app/mail/transport.server.ts";
import { mailWords } from "#app/mail/words.server.ts";
import { besideSentence } from "./beside-sentence.server.ts";
import { composeQuestion } from "./compose-question.server.ts";

/**
 * A mailing as it goes out, in the language the grower answered in, or is known to read, with times on the clock of the
 * operation's state.
 * @param link the personal link of an invitation or a reminder, or of a question; other mail has none.
 */
export async function composeMail(mailing: Mailing, link: string | null): Promise<OutgoingMail> {
	if (mailing.kind === "question") return composeQuestion(mailing, link ?? "");
	const language = (mailing.response_language ?? mailing.language) === "es" ? "es" : "en";
	const t = await mailWords(language);
	// A receipt was asked for by sending in: it is no mail that one stops.
	const stopAddress = mailing.kind === "receipt" ? null : stopAddressOf(mailing.operation_id);
	const format = formatterFor(language, t);
	const isThanks = mailing.kind === "thank_you";
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
			link: isThanks ? `${env().BASE_URL}/orchard/compare/${mailing.survey_id}` : link,
			mapLink: `${env().BASE_URL}/map${mailing.county_fips && `?area=${mailing.county_fips}`}`,
			beside: isThanks ? await besideSentence(mailing, { language, t, format }) : null,
			stopAddress,
			receipt: receiptOf(mailing),
		},
		t,
		format,
	);
	return {
		to: { name: mailing.contact_name, address: mailing.email ?? "" },
		subject: letter.subject,
		text: asText(letter),
		html: asHtml(letter),
		language,
		messageId: messageIdOf(mailing.mailing_id),
		stopAddress,
	};
}

function receiptOf({ receipt_code: code, late_at: lateAt, submitted_at: inTimeAt }: Mailing) {
	const submittedAt = lateAt ?? inTimeAt;
	return code && submittedAt ? { code, submittedAt, isLate: lateAt !== null } : null;
}

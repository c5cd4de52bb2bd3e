import type { Mailing } from "#app/collect/survey-mailing.server.ts";
import { wordsIn } from "#app/i18n/language.ts";
import { asHtml, asText, type Letter } from "#app/mail/letter.ts";
import { stopAddressOf } from "#app/mail/stop-token.server.ts";
import { messageIdOf, type OutgoingMail, senderName } from "#app/mail/transport.server.ts";
import { mailWords } from "#app/mail/words.server.ts";

/**
 * The mail that asks a grower about one answer. It says neither question nor answer: mail is read by others too, and both
 * stand on the page that its link opens.
 */
export async function composeQuestion(mailing: Mailing, link: string): Promise<OutgoingMail> {
	const language = (mailing.response_language ?? mailing.language) === "es" ? "es" : "en";
	const t = await mailWords(language);
	const stopAddress = stopAddressOf(mailing.operation_id);
	const values = {
		network: senderName(),
		contact: mailing.contact_name,
		operation: mailing.operation_name,
		survey: wordsIn(mailing.title, language),
		season: String(mailing.season),
	};
	const letter: Letter = {
		language,
		subject: t("mail:question.subject", values),
		heading: t("mail:question.heading", values),
		paragraphs: [
			mailing.contact_name ? t("mail:greeting", values) : t("mail:greeting_unnamed"),
			t("mail:question.what", values),
			{ link, label: t("mail:question.button") },
			t("mail:question.why", values),
			t("mail:question.help", values),
		],
		footer: [t("mail:footer", values), t("mail:stop.why")].join("\n"),
		stop: { link: stopAddress, label: t("mail:stop.link") },
	};
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

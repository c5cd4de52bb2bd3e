import { closeEndedGrants, findGrant, takeEndsToTell } from "#app/auth/grant-end.server.ts";
import { scopedTransaction } from "#app/auth/scope.server.ts";
import { isLanguage } from "#app/i18n/language.ts";
import { env } from "#app/lib/env.server.ts";
import { formatterFor } from "#app/lib/format.ts";
import { log } from "#app/lib/log.server.ts";
import { writeGrantEndLetter } from "#app/mail/desk-letters.ts";
import { asHtml, asText } from "#app/mail/letter.ts";
import { messageIdOf, sendMail as deliver, senderName } from "#app/mail/transport.server.ts";
import { mailWords } from "#app/mail/words.server.ts";
import { queueJob } from "./queue.server.ts";

const none = { kind: "none" } as const;

/** Once a day: notes which grants have ended, and tells the people of those that soon will. */
export async function watchGrantEnds(): Promise<void> {
	const done = await scopedTransaction(none, async (trx) => {
		const ended = await closeEndedGrants(trx);
		const told = await takeEndsToTell(trx);
		for (const roleGrantId of told) await queueJob(trx, "tell_grant_end", { roleGrantId });
		return { ended, told: told.length };
	});
	if (done.ended + done.told > 0) log.info(done, "ends of grants");
}

/** Tells somebody by mail that a grant ends soon; nothing where it has ended, or goes on, meanwhile. */
export async function tellGrantEnd({ roleGrantId }: { roleGrantId: string }): Promise<void> {
	const grant = await scopedTransaction(none, (trx) => findGrant(trx, roleGrantId));
	if (!grant?.email || !grant.endsOn || !grant.holds) return;
	const language = isLanguage(grant.language) ? grant.language : "en";
	const t = await mailWords(language);
	const letter = writeGrantEndLetter(
		{
			language,
			network: senderName(),
			name: grant.name,
			role: grant.role,
			stateFips: grant.stateFips,
			day: formatterFor(language, t).day(grant.endsOn),
			// A researcher asks for another year; for others a coordinator moves the day.
			link: `${env().BASE_URL}${grant.role === "researcher" ? "/dataroom/access" : "/me"}`,
		},
		t,
	);
	await deliver({
		to: { name: grant.name, address: grant.email },
		subject: letter.subject,
		text: asText(letter),
		html: asHtml(letter),
		language,
		messageId: messageIdOf(`${roleGrantId}.${grant.endsOn}`),
		stopAddress: null,
	});
}

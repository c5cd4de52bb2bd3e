import { type OutgoingMail, sendMail as deliver } from "#app/mail/transport.server.ts";

type Mark = { tried?: boolean; sent?: true; failed?: "returned" | "uncertain" | "server_away" };

/**
 * Sends one noted mail at most once: that the mail server is about to get it is committed first, and what may have arrived is
 * not sent again.
 * @param mark notes how far it is, in a transaction of its own.
 * @param compose undefined where there is nothing to tell any more.
 */
export async function sendOnce(
	{ triedAt }: { triedAt: Date | null },
	compose: () => Promise<OutgoingMail | undefined>,
	mark: (state: Mark) => Promise<void>,
	lastTry: boolean,
): Promise<void> {
	if (triedAt) return mark({ failed: "uncertain" });
	const mail = await compose();
	if (!mail) return;
	await mark({ tried: true });
	try {
		const outcome = await deliver(mail);
		await mark(outcome === "sent" ? { sent: true } : { failed: outcome });
	} catch (error) {
		await mark(lastTry ? { failed: "server_away" } : { tried: false });
		throw error;
	}
}

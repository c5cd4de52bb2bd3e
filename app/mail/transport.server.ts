import { PassThrough } from "node:stream";
import { createTransport, type Transporter } from "nodemailer";
import { env } from "#app/lib/env.server.ts";
import { headerText } from "./letter.ts";

export type OutgoingMail = {
	to: { name: string; address: string };
	subject: string;
	text: string;
	html: string;
	language: string;
	/** The same at every try, so that a mail server can tell a repeat. */
	messageId: string;
	/** Where one press, also the mail program's own, ends mail of this kind; null for mail that was asked for. */
	stopAddress: string | null;
};
/**
 * `returned`: the server will never take mail for this address, as opposed to not now. `uncertain`: it had the whole mail
 * when the connection ended, and did not say whether it took it.
 */
export type SendOutcome = "sent" | "returned" | "uncertain";

const transports = new Map<string, Transporter>();

/** One transport an address of a mail server, with time-outs, so that a silent server holds up no worker for long. */
function transportOf(url: string): Transporter {
	let transport = transports.get(url);
	if (!transport) {
		const settings = { connectionTimeout: 10_000, greetingTimeout: 10_000, socketTimeout: 30_000, dnsTimeout: 10_000 };
		transport = createTransport({ url, ...settings });
		transport.use("stream", (mail, done) => {
			mail.message.transform(() => noticeEnd((mail.data as Handover).handedOver));
			done();
		});
		transports.set(url, transport);
	}
	return transport;
}

type Handover = { handedOver: { whole: boolean } };

/** Notices when the last of a mail was taken from it, which the server does only after it asked for the mail. */
function noticeEnd(handedOver: Handover["handedOver"]): PassThrough {
	return new PassThrough().once("end", () => {
		handedOver.whole = true;
	});
}

/**
 * Sends one mail to one address, and at most once: what may have arrived is not tried again.
 * @throws whatever may be better later: the server away, a 4xx answer, a 5xx to our sign-in or sender, which is no fault
 *   of the addressee.
 */
export async function sendMail(mail: OutgoingMail): Promise<SendOutcome> {
	const { SMTP_URL, MAIL_FROM } = env();
	const handedOver = { whole: false };
	try {
		await transportOf(SMTP_URL).sendMail({
			...({ handedOver } satisfies Handover),
			from: MAIL_FROM,
			to: { name: headerText(mail.to.name), address: headerText(mail.to.address) },
			subject: headerText(mail.subject),
			text: mail.text,
			html: mail.html,
			messageId: mail.messageId,
			headers: {
				"Auto-Submitted": "auto-generated",
				"Content-Language": mail.language,
				...stopHeaders(mail.stopAddress),
			},
			// Nothing in a letter may make the server read a file or fetch an address.
			disableFileAccess: true,
			disableUrlAccess: true,
		});
		return "sent";
	} catch (error) {
		if (isReturned(error)) return "returned";
		if (handedOver.whole && !hasAnswer(error)) return "uncertain";
		throw error;
	}
}

/** RFC 8058. By hand, since nodemailer's own list headers add a comment, which mail programs need not understand. */
function stopHeaders(stopAddress: string | null): Record<string, string> {
	if (!stopAddress) return {};
	return { "List-Unsubscribe": `<${stopAddress}>`, "List-Unsubscribe-Post": "List-Unsubscribe=One-Click" };
}

function hasAnswer(error: unknown): boolean {
	return (error as { responseCode?: number } | null)?.responseCode !== undefined;
}

function isReturned(error: unknown): boolean {
	if (!(error instanceof Error)) return false;
	const { code, command, responseCode } = error as Error & { code?: string; command?: string; responseCode?: number };
	if (code === "EENVELOPE" && command === "API") return true; // an address that no server could take
	const ofAddressee = code === "EMESSAGE" || (code === "EENVELOPE" && command === "RCPT TO");
	return ofAddressee && responseCode !== undefined && responseCode >= 500;
}

/** The display name of the sender: whom growers know the mail to be from. */
export function senderName(mailFrom = env().MAIL_FROM): string {
	return /^\s*"?([^"<]+?)"?\s*</.exec(mailFrom)?.[1] ?? mailFrom;
}

/** `<mailing id@host of the site>`. */
export function messageIdOf(mailingId: string): string {
	return `<${mailingId}@${new URL(env().BASE_URL).hostname}>`;
}

/** Whether the mail server answers and takes our sign-in. @throws what it said. */
export async function checkMailServer(): Promise<void> {
	await transportOf(env().SMTP_URL).verify();
}

import { simpleParser } from "mailparser";
import { SMTPServer, type SMTPServerSession } from "smtp-server";
import type { MailStore } from "./store.ts";
import type { TroubleMaker } from "./trouble.ts";

const largest = 10_000_000;

/** Takes mail for any address and keeps it in the store; sends nothing on. */
export function createSmtp(store: MailStore, trouble: TroubleMaker): SMTPServer {
	return new SMTPServer({
		name: "mail.fake.example",
		authOptional: true,
		disabledCommands: ["STARTTLS"],
		disableReverseLookup: true,
		size: largest,
		onConnect: (_session, callback) => callback(trouble.next("refuse")),
		onRcptTo: (_address, _session, callback) => callback(trouble.next("bounce")),
		onData: (stream, session, callback) => {
			simpleParser(stream)
				.then((mail) => {
					const tooLarge = stream.sizeExceeded && Object.assign(new Error("Message too large"), { responseCode: 552 });
					const problem = tooLarge || trouble.next("defer");
					if (problem) return callback(problem);
					const { from, to } = envelope(session);
					callback(null, `kept as ${store.add(mail, from, to).id}`);
				})
				.catch((error: unknown) => callback(error instanceof Error ? error : new Error(String(error))));
		},
	});
}

function envelope({ envelope: { mailFrom, rcptTo } }: SMTPServerSession): { from: string; to: string[] } {
	return { from: mailFrom ? mailFrom.address : "", to: rcptTo.map(({ address }) => address) };
}

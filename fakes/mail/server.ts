import { z } from "zod";
import { createInbox } from "./inbox.ts";
import { createSmtp } from "./smtp.ts";
import { MailStore } from "./store.ts";
import { TroubleMaker } from "./trouble.ts";

const { SMTP_URL, INBOX_URL } = z.object({ SMTP_URL: z.url(), INBOX_URL: z.url() }).parse(process.env);

const store = new MailStore();
const trouble = new TroubleMaker();
// This machine only: mail holds personal links.
createSmtp(store, trouble)
	.on("error", (error) => console.error(`smtp: ${error.message}`))
	.listen(Number(new URL(SMTP_URL).port), "127.0.0.1", () => {
		createInbox(store, trouble).listen(Number(new URL(INBOX_URL).port), "127.0.0.1", (error) => {
			if (error) throw error;
			console.log(`demo mail at ${SMTP_URL}, inbox at ${INBOX_URL}`);
		});
	});

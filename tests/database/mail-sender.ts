import { sendMail } from "#app/jobs/send-mail.server.ts";

// A process of its own that a test can kill while it sends. Its settings come with its environment.
await sendMail({ mailingId: process.argv[2] ?? "" });
process.exit(0);

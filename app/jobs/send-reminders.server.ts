import { scopedTransaction } from "#app/auth/scope.server.ts";
import { sendDueReminder, setAllAlarms } from "#app/collect/reminders.server.ts";

/** Wakes up at a reminder's time and queues its mails, all or none. */
export async function sendReminders({ surveyId, wave }: { surveyId: string; wave: number }): Promise<void> {
	await scopedTransaction({ kind: "network" }, (trx) => sendDueReminder(trx, surveyId, wave));
}

/** What the worker does when it starts. */
export async function setReminderAlarms(): Promise<void> {
	await scopedTransaction({ kind: "network" }, setAllAlarms);
}

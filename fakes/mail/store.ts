import { randomUUID } from "node:crypto";
import type { ParsedMail } from "mailparser";

export type Message = {
	id: string;
	receivedAt: string;
	/** From the envelope, which is where the mail really went. */
	from: string;
	to: string[];
	subject: string;
	text: string;
	html: string;
	headers: Record<string, string>;
};

const most = 5_000;

/** Received mail, newest first; beyond five thousand the oldest are dropped. */
export class MailStore {
	#messages: Message[] = [];

	add(mail: ParsedMail, from: string, to: string[]): Message {
		const message = {
			id: randomUUID(),
			receivedAt: new Date().toISOString(),
			from,
			to,
			subject: mail.subject ?? "",
			text: mail.text ?? "",
			html: mail.html || "",
			headers: Object.fromEntries(mail.headerLines.map(({ key, line }) => [key, line.slice(key.length + 1).trim()])),
		};
		this.#messages.unshift(message);
		this.#messages.length = Math.min(this.#messages.length, most);
		return message;
	}

	find(id: string): Message | undefined {
		return this.#messages.find((message) => message.id === id);
	}

	/** @param to part of an address, in any case; empty for all. */
	list(to = ""): Message[] {
		const part = to.trim().toLowerCase();
		return this.#messages.filter((message) => message.to.some((address) => address.toLowerCase().includes(part)));
	}

	clear(): void {
		this.#messages = [];
	}
}

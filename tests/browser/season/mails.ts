import { createHash } from "node:crypto";
import type { Client } from "pg";
import { expect } from "vitest";

export type Mail = {
	to: string[];
	subject: string;
	text: string;
	html: string;
	headers: Record<string, string>;
};

export async function readInbox(inboxUrl: string): Promise<Mail[]> {
	return (await (await fetch(`${inboxUrl}/messages.json`)).json()) as Mail[];
}

type Asked = { name: string; email: string; language: "en" | "es" };

const hashOf = (token: string) => createHash("sha256").update(token).digest("base64url");
const words = {
	en: { subject: (name: string) => `: how was it at ${name}?`, stop: "Stop these e-mails" },
	es: { subject: (name: string) => `: ¿cómo le fue a ${name}?`, stop: "No recibir más estos correos" },
};

/** Each of those asked has one invitation, in their language, whose link opens their own answers; nobody else has any. */
export async function checkInvitations(mails: Mail[], asked: Asked[], owner: Client): Promise<void> {
	expect(mails.map(({ to }) => to.join()).toSorted()).toEqual(asked.map(({ email }) => email).toSorted());
	const { rows } = await owner.query<{ hash: string; name: string }>(
		"select l.token_hash as hash, o.name from collect.personal_link l join directory.operation o using (operation_id)",
	);
	const nameOfHash = new Map(rows.map(({ hash, name }) => [hash, name]));
	const mailTo = new Map(mails.map((mail) => [mail.to.join(), mail]));
	for (const { name, email, language } of asked) {
		const { subject, text, html, headers } = mailTo.get(email)!;
		expect(subject).toContain(words[language].subject(name));
		expect(text).toContain(words[language].stop);
		expect(headers["content-language"]).toBe(language);
		const tokens = [...text.matchAll(/\/r\/([\w-]{43})\b/g)].map(([, token]) => token!);
		expect(tokens, email).toHaveLength(1);
		expect(nameOfHash.get(hashOf(tokens[0]!)), email).toBe(name);
		expect(html).toContain(`/r/${tokens[0]!}`);
		expect(headers["list-unsubscribe"], email).toMatch(/^<http:\/\/localhost:\d+\/stop-mail\/[\w.~-]+>$/);
		expect(headers["list-unsubscribe-post"]).toBe("List-Unsubscribe=One-Click");
	}
	const stops = mails.map(({ headers }) => headers["list-unsubscribe"]);
	expect(new Set(stops).size).toBe(asked.length);
}

import { createHash } from "node:crypto";
import { z } from "zod";
import { people } from "./people.mjs";

export type Account = { subject: string; name: string; email: string };
export type Client = { id: string; secret: string; redirectUris: string[] };

const text = z.string().max(2000).optional().catch(undefined);

/** What an application sends to begin a sign-in (RFC 6749 section 4.1.1, RFC 7636 section 4.3). */
const AuthorizeQuery = z.object({
	client_id: text,
	redirect_uri: text,
	response_type: text,
	state: text,
	code_challenge: text,
	code_challenge_method: text,
	scope: text,
	nonce: text,
	lang: text,
	persona: text,
	name: text,
	email: text,
});
export type AuthorizeQuery = z.infer<typeof AuthorizeQuery>;

export const readQuery = (query: unknown): AuthorizeQuery => AuthorizeQuery.parse(query);

/** A request from an unknown application, or to an unknown address, must not be answered by a redirect. */
export function isKnownClient({ client_id, redirect_uri }: AuthorizeQuery, client: Client): boolean {
	return client_id === client.id && client.redirectUris.includes(redirect_uri ?? "");
}

const invalid = (error_description: string) => ({ error: "invalid_request", error_description });

/** @returns the error of RFC 6749 section 4.1.2.1, or undefined when the request is whole. */
export function requestError(query: AuthorizeQuery): { error: string; error_description: string } | undefined {
	if (query.response_type !== "code") {
		return { error: "unsupported_response_type", error_description: "response_type must be code" };
	}
	if (!query.state) return invalid("state is missing");
	if (query.code_challenge_method !== "S256") return invalid("code_challenge_method must be S256");
	// 43 characters are the 256 bits of a SHA-256 in base64url without padding.
	if (!/^[\w-]{43}$/.test(query.code_challenge ?? "")) return invalid("code_challenge is missing or not of S256");
	return undefined;
}

const NewPerson = z.object({ name: z.string().trim().min(1).max(200), email: z.email().max(254) });

/** Who was chosen; `problems` names the fields of the form for somebody new that are not filled in. */
export function chosenAccount(query: AuthorizeQuery): { account?: Account; problems: ("name" | "email")[] } {
	if (query.persona !== "new") {
		const person = people.find(({ subject }) => subject === query.persona);
		return person
			? { account: { subject: person.subject, name: person.name, email: person.email }, problems: [] }
			: { problems: [] };
	}
	const parsed = NewPerson.safeParse(query);
	if (!parsed.success) {
		const fields = new Set(parsed.error.issues.map((issue) => issue.path[0]));
		return { problems: (["name", "email"] as const).filter((field) => fields.has(field)) };
	}
	// The same e-mail is the same person again, so that a second sign-in finds what the first one did.
	const subject = `new-${createHash("sha256").update(parsed.data.email.toLowerCase()).digest("hex").slice(0, 16)}`;
	return { account: { subject, ...parsed.data }, problems: [] };
}

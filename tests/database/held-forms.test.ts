import { RouterContextProvider } from "react-router";
import { expect, test } from "vitest";
import { deskGuard } from "#app/auth/guard.server.ts";
import { holderOf } from "#app/auth/holder.server.ts";
import { sessionContext, sessionMiddleware } from "#app/auth/session.server.ts";
import { visitorMiddleware } from "#app/auth/visitor.server.ts";
import type { Refusal } from "#app/lib/refusal.ts";
import { sentByHeader, sentByParam } from "#app/lib/sent-by.ts";
import { openSurveysDatabase } from "./surveys-fixture.ts";

const { owner, iowa, other } = await openSurveysDatabase();
for (const { personId, stateFips } of [iowa, other])
	await owner.query("insert into auth.role_grant (person_id, role, state_fips) values ($1, 'associate', $2)", [
		personId,
		stateFips[0],
	]);

const typed = { name: "contact", note: "Rang,\r\nno answer" };
const holder = holderOf("person", iowa.personId);
const held = {
	holder,
	fields: [
		{ place: 0, name: "name", value: "contact" },
		{ place: 1, name: "note", value: typed.note },
	],
};

/** Signs somebody in; the answer is what the browser sends from then on. */
async function signIn(personId: string): Promise<string> {
	const context = new RouterContextProvider();
	const request = new Request("https://survey.example/sign-in/callback");
	const response = await sessionMiddleware({ request, context } as never, async () => {
		context.get(sessionContext).set("personId", personId);
		return new Response();
	});
	return (response as Response).headers.get("set-cookie")!.split(";")[0]!;
}

type Sent = { headers?: Record<string, string>; search?: string; body?: BodyInit };

/** What a page of the desk answers to a form: "taken", or its refusal. */
async function post(cookie: string, { headers, search = "", body = new URLSearchParams(typed) }: Sent = {}) {
	const request = new Request(`https://survey.example/desk/growers/new${search}`, {
		method: "POST",
		body,
		headers: { cookie, "content-length": "40", ...headers },
	});
	const args = { request, context: new RouterContextProvider(), params: {} } as never;
	let answer: Refusal | "taken" | undefined;
	await sessionMiddleware(args, async () => {
		await visitorMiddleware(args, async () => {
			try {
				await deskGuard(args, async () => new Response());
				answer = "taken";
			} catch (refused) {
				answer = (refused as { data: Refusal }).data;
			}
			return new Response();
		});
		return new Response();
	});
	return answer;
}

const endSessions = () => owner.query("update auth.session set seen_at = now() - interval '13 hours'");

test("a form without scripts comes back whole when the session has ended, and is taken of the same person alone", async () => {
	const before = await signIn(iowa.personId);
	expect(await post(before)).toBe("taken");
	await endSessions();
	expect(await post(before)).toEqual({ code: "sign_in_needed", posted: held });
	const search = `?${sentByParam}=${holder}`;
	// Once more before anybody has signed in, also without the cookie of the session that ended.
	expect(await post("", { search })).toEqual({ code: "sign_in_needed", posted: held });
	expect(await post(await signIn(other.personId), { search })).toEqual({ code: "other_person", posted: held });
	expect(await post(await signIn(iowa.personId), { search })).toBe("taken");
});

test("a page with scripts holds its form itself, and says whose it is", async () => {
	const headers = { [sentByHeader]: holder };
	const cookie = await signIn(iowa.personId);
	expect(await post(cookie, { headers })).toBe("taken");
	await endSessions();
	expect(await post(cookie, { headers })).toEqual({ code: "sign_in_needed" });
	expect(await post(await signIn(other.personId), { headers })).toEqual({ code: "other_person" });
	expect(await post(await signIn(iowa.personId), { headers })).toBe("taken");
});

test("nothing comes back of a file, of a form that nobody knows the sender of, and of one that is too large", async () => {
	const lost = { code: "sign_in_needed", posted: "lost" };
	const cookie = await signIn(iowa.personId);
	await endSessions();
	const body = new FormData();
	body.set("file", new File(["Farm;County"], "list.csv"));
	expect(await post(cookie, { body })).toEqual(lost);
	expect(await post(cookie, { headers: { "content-length": "1000001" } })).toEqual(lost);
	expect(await post("tallygrove=forged")).toEqual(lost);
});

test("a right that was taken away is refused as before", async () => {
	const cookie = await signIn(other.personId);
	await owner.query("update auth.role_grant set revoked_at = now() where person_id = $1", [other.personId]);
	expect(await post(cookie)).toEqual({ code: "role_needed", role: "associate" });
});

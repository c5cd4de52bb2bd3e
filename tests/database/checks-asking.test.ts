import type { Client } from "pg";
import { afterAll, afterEach, beforeAll, describe, expect, test } from "vitest";
import { scopedTransaction } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { sendMail } from "#app/jobs/send-mail.server.ts";
import { findAskedBy, replyToQuestion } from "#app/review/edit-question.server.ts";
import { askGrower } from "#app/routes/desk/parts/checks/ask.server.ts";
import { decideFinding } from "#app/routes/desk/parts/checks/decide.server.ts";
import { leave } from "#app/routes/grower/parts/leaving.server.ts";
import { createTestDatabase } from "#tests/helpers/database.ts";
import { asGrower, growerOf } from "./answering-fixture.ts";
import { findingsOf, oddSurvey } from "./checks-fixture.ts";
import { startMailServer } from "./mail-fixture.ts";
import { addPerson, asDesk, connectOwner, count, loadPlaces, useDatabase } from "./surveys-fixture.ts";

let database: Awaited<ReturnType<typeof createTestDatabase>>;
let mail: Awaited<ReturnType<typeof startMailServer>>;
let owner: Client;
let iowa: Associate;
let other: Associate;
let wisconsin: Associate;

beforeAll(async () => {
	[database, mail] = await Promise.all([createTestDatabase(), startMailServer()]);
	useDatabase(database, { SMTP_URL: mail.url });
	owner = await connectOwner(database.ownerUrl);
	await loadPlaces(owner);
	iowa = await addPerson(owner, "Iowa's associate", ["19"]);
	other = await addPerson(owner, "Iowa's other associate", ["19"]);
	wisconsin = await addPerson(owner, "Wisconsin's associate", ["55"]);
});
afterAll(async () => {
	await owner.end();
	await Promise.all([database.drop(), mail.stop()]);
});
afterEach(() => void mail.reset());

/** A survey with an odd answer about which nobody was asked yet. */
async function odd(language: "en" | "es" = "en") {
	const survey = await oddSurvey(owner, iowa);
	await owner.query("update collect.response set language = $2 where survey_id = $1", [survey.surveyId, language]);
	const place = { surveyId: survey.surveyId, findingId: survey.findingOf("harvested").edit_finding_id };
	const ask = (viewer = iowa) => asDesk(viewer, (trx) => askGrower(trx, viewer, place, 0));
	const mailings = async () => {
		const { rows } = await owner.query(
			"select mailing_id, failure from collect.mailing where survey_id = $1 and kind = 'question'",
			[survey.surveyId],
		);
		return rows as { mailing_id: string; failure: string | null }[];
	};
	return { ...survey, place, ask, mailings };
}

/** Sends what was queued. @returns the token of the mail's link. */
async function sent(mailings: { mailing_id: string }[]): Promise<string> {
	for (const { mailing_id: mailingId } of mailings) await sendMail({ mailingId });
	return /https:\/\/survey\.example\/check\/([\w-]{43})\b/.exec(mail.received.at(-1)?.text ?? "")?.[1] ?? "";
}

const find = (token: string) => scopedTransaction({ kind: "network" }, (trx) => findAskedBy(trx, token));
const reply = async (token: string, said: "right" | "wrong", words = "") => {
	const asked = await find(token);
	if (!asked) throw new Error("the link asks nothing");
	return scopedTransaction({ kind: "network" }, (trx) => replyToQuestion(trx, asked, { reply: said, words }));
};

describe("asking a grower", () => {
	test("sends one mail in the grower's language, pressed twice and by two, and says no answer in it", async () => {
		const { ask, mailings } = await odd("es");
		expect(await Promise.all([ask(), ask(other)])).toEqual(["done", "done"]);
		const queued = await mailings();
		expect(queued).toHaveLength(1);
		const token = await sent([...queued, ...queued]);
		expect(mail.received).toHaveLength(1);
		const [letter] = mail.received;
		expect(letter?.subject).toContain("¿Es correcto?");
		expect(token).toHaveLength(43);
		for (const told of ["30000", "30,000", "30.000"]) expect(letter?.text).not.toContain(told);
		// Only its hash is kept.
		expect(await count(owner, "collect.edit_question q where to_jsonb(q)::text like $1", [`%${token}%`])).toBe(0);
	});

	test("shows the answer to who has the link, changes nothing by being opened, and takes one reply", async () => {
		const { surveyId, operationId, ask, mailings } = await odd();
		await ask();
		const token = await sent(await mailings());
		expect(await find(token)).toMatchObject({ reply: null, isOpen: true, about: [{ value: 30_000 }] });
		expect(await find(token)).toMatchObject({ reply: null });
		expect(await reply(token, "wrong", "3,000 it was")).toBe("kept");
		expect(await reply(token, "right")).toBe("already");
		expect(await find(token)).toMatchObject({ reply: "wrong" });
		const finding = (await findingsOf(owner, surveyId, operationId)).find(
			({ question_key }) => question_key === "harvested",
		);
		// An associate decides: the reply alone changes no answer.
		expect(finding).toMatchObject({ outcome: null });
		const words = `collect.edit_finding_step where edit_finding_id = $1 and step = 'said_wrong' and words = '3,000 it was'`;
		expect(await count(owner, words, [finding!.edit_finding_id])).toBe(1);
	});

	test("is not done by another state's associate, nor where no mail can go, and each reason is told", async () => {
		const { operationId, ask, mailings } = await odd();
		expect(await ask(wisconsin)).toBe("not_found");
		const set = (change: string) =>
			owner.query(`update directory.operation set ${change} where operation_id = $1`, [operationId]);
		await set("mail_wanted = false");
		expect(await ask()).toBe("not_wanted");
		await set("mail_wanted = true, mail_returned_at = now()");
		expect(await ask()).toBe("returned");
		await set("mail_returned_at = null, email = null");
		expect(await ask()).toBe("no_address");
		expect(await mailings()).toEqual([]);
	});

	test("is given up when it was decided before the mail went, and its link dies with the answers", async () => {
		const { place, ask, mailings } = await odd();
		await ask();
		await asDesk(iowa, (trx) => decideFinding(trx, iowa, place, { act: "confirm", version: 0, words: "" }));
		await sent(await mailings());
		expect(mail.received).toHaveLength(0);
		expect(await mailings()).toMatchObject([{ failure: "decided" }]);

		const second = await odd();
		await second.ask();
		const token = await sent(await second.mailings());
		expect(await find(token)).toBeDefined();
		expect(await find(`${token.slice(0, -1)}${token.endsWith("A") ? "B" : "A"}`)).toBeUndefined();
		expect(await find("' or true")).toBeUndefined();
		const grower = growerOf(second.operationId);
		await asGrower(grower, (trx) => leave(trx, grower, second.operationId));
		expect(await find(token)).toBeUndefined();
		const asked = "collect.edit_question join collect.mailing using (mailing_id) where survey_id = $1";
		expect(await count(owner, asked, [second.surveyId])).toBe(1);
	});
});

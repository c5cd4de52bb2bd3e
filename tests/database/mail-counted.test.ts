import { expect, test } from "vitest";
import {
	countInvited,
	countMailings,
	countToWrite,
	countWithoutAddress,
	sendInvitations,
	sendReminders,
} from "#app/collect/invitations.server.ts";
import { openSurvey } from "#app/collect/survey-opening.server.ts";
import { createSurvey } from "#app/collect/surveys.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { addOperation, answerFor, asDesk, draftOf, openSurveysDatabase } from "./surveys-fixture.ts";

// Whom to write to is counted off what the frame keeps of its mails: it must agree with who gets one and with the mails.

const { owner, iowa, wisconsin, both } = await openSurveysDatabase();

class Undone extends Error {}

/** How many mails the button would queue now; none is. */
async function wouldQueue(viewer: Associate, send: typeof sendInvitations): Promise<number> {
	let queued = 0;
	const sent = asDesk(viewer, async (trx) => {
		const outcome = await send(trx, viewer, surveyId);
		if (typeof outcome === "string") throw new Error(outcome);
		queued = outcome.queued;
		throw new Undone();
	});
	await expect(sent).rejects.toThrow(Undone);
	return queued;
}

const ids: string[] = [];
for (let i = 0; i < 24; i++)
	ids.push(await addOperation(owner, { state: i % 4 === 0 ? "55" : "19", email: `g${i}@orchards.example` }));
const draft = draftOf(["19", "55"], { crops: ["apple"] });
const surveyId = await asDesk(both, async (trx) => {
	const made = (await createSurvey(trx, both, draft)) as { surveyId: string };
	expect(await openSurvey(trx, both, made.surveyId)).toBe("opened");
	return made.surveyId;
});

async function expectAgreed() {
	for (const viewer of [iowa, wisconsin, both]) {
		const counts = await asDesk(viewer, (trx) => countMailings(trx, viewer, surveyId));
		const { reminderWave, toInvite, toRemind } = counts;
		const invited = await asDesk(viewer, (trx) => countInvited(trx, viewer, surveyId));
		const withoutAddress = await asDesk(viewer, (trx) => countWithoutAddress(trx, viewer, surveyId));
		const today = await asDesk(viewer, (trx) => countToWrite(trx, viewer, surveyId));
		expect(today).toEqual({ toInvite, withoutAddress });
		expect(toInvite).toBe(await wouldQueue(viewer, sendInvitations));
		expect(toRemind).toBe(await wouldQueue(viewer, (trx, who, id) => sendReminders(trx, who, id, reminderWave)));
		const { rows } = await owner.query(
			`select count(distinct m.operation_id)::int as n from collect.mailing m join collect.frame_operation f using (survey_id, operation_id)
			where survey_id = $1 and kind = 'invitation' and failed_at is null and f.state_fips = any ($2)`,
			[surveyId, viewer.stateFips],
		);
		expect(invited).toBe(rows[0].n);
		const one = await asDesk(viewer, (trx) => countMailings(trx, viewer, surveyId, [ids[0]!, ids[1]!]));
		expect(one.toInvite).toBeLessThanOrEqual(Math.min(toInvite, viewer.stateFips.length));
	}
}

test("counts are of those who would be written to, whatever became of them", async () => {
	await expectAgreed();
	await asDesk(both, (trx) => sendInvitations(trx, both, surveyId, ids.slice(0, 18)));
	await expectAgreed();
	const mail = "update collect.mailing set";
	await owner.query(`${mail} sent_at = now() where operation_id = any ($1)`, [ids.slice(0, 12)]);
	await owner.query(`${mail} failed_at = now(), failure = 'refused' where operation_id = any ($1)`, [
		ids.slice(12, 15),
	]);
	await expectAgreed();
	const operation = "update directory.operation set";
	await owner.query(`${operation} email = null where operation_id = any ($1)`, [[ids[1], ids[13], ids[19]]]);
	await owner.query(`${operation} mail_wanted = false where operation_id = $1`, [ids[2]]);
	await owner.query(`${operation} mail_returned_at = now() where operation_id = $1`, [ids[3]]);
	await owner.query(`${operation} status = 'left', left_at = now() where operation_id = $1`, [ids[5]]);
	for (const id of [ids[4]!, ids[6]!, ids[20]!]) await answerFor(owner, surveyId, id);
	await owner.query("update collect.frame_operation set disposition = 'refused' where operation_id = $1", [ids[7]]);
	await expectAgreed();
	const counts = await asDesk(both, (trx) => countMailings(trx, both, surveyId));
	expect(counts.reminderWave).toBe(1);
	expect(await asDesk(both, (trx) => countInvited(trx, both, surveyId))).toBe(15);
	expect(await asDesk(both, (trx) => countWithoutAddress(trx, both, surveyId))).toBe(3);
	expect(counts.toInvite).toBeGreaterThan(2);
	expect(counts.toRemind).toBeGreaterThan(2);
});

test("a mailing has the state that its operation has in the frame, and nobody gives it another", async () => {
	const tell = async () => {
		const { rows } = await owner.query(
			`select count(*)::int as all, count(*) filter (where m.state_fips = f.state_fips)::int as same,
				count(*) filter (where m.state_fips = '19')::int as iowa
			from collect.mailing m join collect.frame_operation f using (survey_id, operation_id)`,
		);
		return rows[0];
	};
	const before = await tell();
	expect(before.same).toBe(before.all);
	expect(before.iowa).toBeGreaterThan(5);
	await asDesk(both, (trx) => trx.updateTable("collect.mailing").set({ state_fips: "55" }).execute());
	expect(await tell()).toEqual(before);
	await owner.query("update collect.frame_operation set state_fips = '55' where operation_id = $1", [ids[1]]);
	expect(await tell()).toEqual({ ...before, iowa: before.iowa - 1 });
});

/** What a frame keeps of its invitations must be what its mailings say. */
async function expectKept() {
	const rows = async () =>
		(
			await owner.query(
				`select operation_id, is_invited, invitation_went_out from collect.frame_operation where survey_id = $1 order by 1`,
				[surveyId],
			)
		).rows;
	const kept = await rows();
	await owner.query("select collect.recount_invitations($1)", [surveyId]);
	expect(kept).toEqual(await rows());
	return kept as { is_invited: boolean; invitation_went_out: boolean }[];
}

const tellKept = async () => {
	const kept = await expectKept();
	return [kept.filter((row) => row.is_invited).length, kept.filter((row) => row.invitation_went_out).length];
};

test("a frame keeps what its invitations came to, whoever writes at once, and nobody else says it", async () => {
	expect(await tellKept()).toEqual([15, 12]);
	const given = async (set: string, of: string[]) =>
		owner.query(
			`update collect.mailing set ${set} where kind = 'invitation' and wave = 1 and operation_id = any ($1)`,
			[of],
		);
	const again = (id: string) =>
		asDesk(both, (trx) =>
			trx
				.insertInto("collect.mailing")
				.values({ survey_id: surveyId, operation_id: id, kind: "invitation", wave: 2 })
				.execute(),
		);
	const upTo = (end: number, from = 0) => ids.slice(from, end);
	const failed = (of: string[]) =>
		asDesk(both, (trx) =>
			trx
				.updateTable("collect.mailing")
				.set({ failed_at: new Date(), failure: "refused" })
				.where("kind", "=", "invitation")
				.where("wave", "=", 1)
				.where("operation_id", "in", of)
				.execute(),
		);
	// A second invitation comes as the first is given up, of the same growers and of others.
	await Promise.all([failed(upTo(6)), ...upTo(8).map(again), failed(upTo(8, 6)), failed(upTo(12, 8))]);
	expect(await tellKept()).toEqual([11, 12]);
	await given("failed_at = null, failure = null", upTo(12));
	await owner.query("delete from collect.mailing where kind = 'invitation' and operation_id = $1", [ids[0]]);
	expect(await tellKept()).toEqual([14, 11]);
	const saysSo = asDesk(both, (trx) => trx.updateTable("collect.frame_operation").set({ is_invited: true }).execute());
	await expect(saysSo).rejects.toThrow("permission denied");
});

import { expect, test } from "vitest";
import { countMailings, countToWrite, sendInvitations, sendReminders } from "#app/collect/invitations.server.ts";
import { openSurvey } from "#app/collect/survey-opening.server.ts";
import { createSurvey } from "#app/collect/surveys.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { addOperation, answerFor, asDesk, draftOf, openSurveysDatabase } from "./surveys-fixture.ts";

// Whom to write to is counted over a whole frame at once, and decided one by one when the mails are queued: both must agree.

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
		const { reminderWave, toInvite, toRemind, invited, withoutAddress } = counts;
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
	expect(counts).toMatchObject({ invited: 15, withoutAddress: 3, reminderWave: 1 });
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

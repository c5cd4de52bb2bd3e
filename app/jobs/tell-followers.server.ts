import {
	addChangeMailings,
	type ChangeKey,
	type ChangeMailing,
	findChangeMailing,
	markChangeMailing,
	type ReleaseChange,
} from "#app/auth/change-mailings.server.ts";
import { scopedTransaction, type Trx } from "#app/auth/scope.server.ts";
import { countyName } from "#app/i18n/county-name.ts";
import { wordsIn } from "#app/i18n/language.ts";
import { env } from "#app/lib/env.server.ts";
import { lookWords } from "#app/lib/figure-words.ts";
import { formatterFor } from "#app/lib/format.ts";
import { type ChangeLetter, writeChangeLetter } from "#app/mail/change-letter.ts";
import { tokenOf } from "#app/mail/id-token.server.ts";
import { asHtml, asText } from "#app/mail/letter.ts";
import { messageIdOf, type OutgoingMail, senderName } from "#app/mail/transport.server.ts";
import { mailWords } from "#app/mail/words.server.ts";
import { listCellChanges } from "#app/publish/cell-changes.server.ts";
import type { Release } from "#app/publish/release.ts";
import { findReleaseById, listEditions, listMeasures } from "#app/publish/releases.server.ts";
import { queueBatch, queueJob } from "./queue.server.ts";
import { sendOnce } from "./send-once.server.ts";

/** So many changed figures stand in the mail itself; the page that it links to has all. */
const listedInMail = 20;
const none = { kind: "none" } as const;

/** Queues telling the followers of a release what became of it, in the transaction that decides it. */
export async function queueFollowers(trx: Trx, releaseId: string, change: ReleaseChange): Promise<void> {
	await queueJob(trx, "tell_followers", { releaseId, change }, { jobKey: `tell_followers:${releaseId}:${change}` });
}

/** Notes and queues one mail for each follower. A first edition is news to nobody; a second run finds nobody left. */
export async function tellFollowers({ releaseId, change }: Omit<ChangeKey, "followId">): Promise<void> {
	const release = await findReleaseById(releaseId);
	if (!release || (change === "revised" && release.edition === 1)) return;
	await scopedTransaction(none, async (trx) => {
		const followIds = await addChangeMailings(trx, { releaseId, seriesId: release.seriesId, change });
		const jobs = followIds.map((followId) => ({
			payload: { releaseId, change, followId },
			jobKey: `tell_follower:${releaseId}:${change}:${followId}`,
		}));
		await queueBatch(trx, "tell_follower", jobs);
	});
}

/** Sends one change to one follower, at most once. */
export async function tellFollower(key: ChangeKey, lastTry = false): Promise<void> {
	const mailing = await scopedTransaction(none, (trx) => findChangeMailing(trx, key));
	if (!mailing) return;
	await sendOnce(
		mailing,
		() => composeChange(key, mailing),
		(state) => scopedTransaction(none, (trx) => markChangeMailing(trx, key, state)),
		lastTry,
	);
}

/** The mail in the follower's language; nothing of a revision that was itself withdrawn meanwhile, which a mail of its own tells. */
async function composeChange(
	{ followId, releaseId, change }: ChangeKey,
	{ email, language }: ChangeMailing,
): Promise<OutgoingMail | undefined> {
	const release = await findReleaseById(releaseId);
	if (!release || (change === "revised" && release.withdrawn)) return undefined;
	const reason = change === "revised" ? release.revisionReason : release.withdrawn?.reason;
	if (!reason) return undefined;
	const t = await mailWords(language);
	const { number, season, title } = release;
	const address = `${env().BASE_URL}/data/${number}`;
	const changed = change === "revised" ? await listChanged(release, language) : null;
	const stopAddress = `${env().BASE_URL}/unfollow/${tokenOf("unfollow", followId)}`;
	const letter = writeChangeLetter(
		{
			language,
			network: senderName(),
			change,
			number,
			named: t("public:data.named", { number, title: wordsIn(title, language), season }),
			reason: wordsIn(reason, language),
			changed,
			link: changed ? `${address}/changes` : address,
			stopAddress,
		},
		t,
	);
	return {
		to: { name: "", address: email },
		subject: letter.subject,
		text: asText(letter),
		html: asHtml(letter),
		language,
		messageId: messageIdOf(`${releaseId}.${change}.${followId}`),
		stopAddress,
	};
}

/** How a release's figures differ from those before it, in words; null where the edition before it was withdrawn. */
async function listChanged(release: Release, language: "en" | "es"): Promise<ChangeLetter["changed"]> {
	const { releaseId, seriesId, edition } = release;
	const previous = (await listEditions(seriesId)).find((one) => one.edition === edition - 1);
	if (!previous || previous.withdrawn) return null;
	const [t, { changes, total }, measures, earlier] = await Promise.all([
		mailWords(language),
		listCellChanges({ releaseId, previousId: previous.releaseId }, { limit: listedInMail }),
		listMeasures(releaseId),
		listMeasures(previous.releaseId),
	]);
	const format = formatterFor(language, t);
	const measureOf = new Map([...earlier, ...measures].map((measure) => [measure.key, measure]));
	const lines = changes.map(({ measureKey, cropKey, areaKey, areaName, areaKind, before, after }) => {
		const measure = measureOf.get(measureKey ?? "");
		return t("dataroom:changeMail.line", {
			area: areaKind === "county" ? countyName(t, { name: areaName, countyFips: areaKey }) : areaName,
			crop: t(`common:crop.${cropKey}`),
			measure: measure ? wordsIn(measure.label, language) : t("public:data.changes.wholeCell"),
			before: lookWords(before, measure, t, format),
			after: lookWords(after, measure, t, format),
		});
	});
	return { total, value: format.number(total), lines };
}

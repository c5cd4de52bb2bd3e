import { scopedTransaction } from "#app/auth/scope.server.ts";
import { wordsIn } from "#app/i18n/language.ts";
import { env } from "#app/lib/env.server.ts";
import { figureWords, type SaidFigure, textWords } from "#app/lib/figure-words.ts";
import { formatterFor } from "#app/lib/format.ts";
import { tokenOf } from "#app/mail/id-token.server.ts";
import { asHtml, asText } from "#app/mail/letter.ts";
import { writeConfirmLetter, writeReportLetter } from "#app/mail/report-letters.ts";
import { messageIdOf, type OutgoingMail, sendMail as deliver, senderName } from "#app/mail/transport.server.ts";
import { mailWords } from "#app/mail/words.server.ts";
import {
	addMailings,
	findMailing,
	findRequest,
	markMailing,
	type ReportMailing,
	sweepRequests,
} from "#app/publish/readership/subscribers.server.ts";
import { findReleaseById, listCoveredStates, listCrops } from "#app/publish/releases.server.ts";
import { cropsOf } from "#app/publish/report.ts";
import { findPublishedById, listReportFiles } from "#app/publish/reports.server.ts";
import { resolveReport, type ResolvedReport } from "#app/publish/resolved-report.server.ts";
import { queueBatch } from "./queue.server.ts";
import { sendOnce } from "./send-once.server.ts";

const none = { kind: "none" } as const;

/** Queues a published report for everybody who asked for such a one. A second run finds nobody left. */
export async function mailReport({ reportId }: { reportId: string }): Promise<void> {
	const report = await findPublishedById(reportId);
	if (!report) return;
	const told = cropsOf(report.content);
	const crops = told.includes("all") ? await listCrops(report.releaseId) : told;
	const subject = { crops, states: await listCoveredStates(report.releaseId) };
	await scopedTransaction(none, async (trx) => {
		const jobs = (await addMailings(trx, reportId, subject)).map((subscriberId) => ({
			payload: { reportId, subscriberId },
			jobKey: `mail_subscriber:${reportId}:${subscriberId}`,
		}));
		await queueBatch(trx, "mail_subscriber", jobs);
	});
}

/** Sends one report to one subscriber, at most once. */
export async function mailSubscriber(
	{ reportId, subscriberId }: { reportId: string; subscriberId: string },
	lastTry = false,
): Promise<void> {
	const mailing = await scopedTransaction(none, (trx) => findMailing(trx, reportId, subscriberId));
	if (!mailing) return;
	const mark = (state: Parameters<typeof markMailing>[3]) =>
		scopedTransaction(none, (trx) => markMailing(trx, reportId, subscriberId, state));
	await sendOnce(mailing, () => composeReport(reportId, mailing), mark, lastTry);
}

/** The report as a mail in the subscriber's language; nothing where its figures have been withdrawn meanwhile. */
export async function composeReport(reportId: string, to: ReportMailing): Promise<OutgoingMail | undefined> {
	const report = await findPublishedById(reportId);
	const release = report && (await findReleaseById(report.releaseId));
	if (!report || !release || release.withdrawn) return undefined;
	const { language, subscriberId } = to;
	const [t, told, files] = await Promise.all([
		mailWords(language),
		resolveReport(report.content, release),
		listReportFiles(reportId),
	]);
	const format = formatterFor(language, t);
	const words = (figure: SaidFigure) => figureWords(figure, t, format);
	const text = (parts: ResolvedReport["title"]) => textWords(parts[language], t, format);
	const figures = told.blocks.flatMap((block) => {
		if (block.type !== "figure" || !block.figure || "count" in block.figure) return [];
		const { measure, cell } = block.figure;
		const crop = t(`common:crop.${cell.cropKey}`);
		const said = { measure: wordsIn(measure.label, language), crop, area: cell.areaName, figure: words(block.figure) };
		return [t("report:mail.figure", said)];
	});
	const address = `${env().BASE_URL}/reports/${report.slug}`;
	const stopAddress = unsubscribeAddressOf(subscriberId);
	const letter = writeReportLetter(
		{
			language,
			network: senderName(),
			title: text(told.title),
			summary: text(told.summary),
			figures,
			correction: report.correction && wordsIn(report.correction, language),
			link: address,
			pdfLink: files.includes(language) ? `${address}/${report.version}-${language}.pdf` : null,
			changeAddress: `${env().BASE_URL}/subscribe`,
			stopAddress,
		},
		t,
	);
	return {
		to: { name: "", address: to.email },
		subject: letter.subject,
		text: asText(letter),
		html: asHtml(letter),
		language,
		messageId: messageIdOf(`${reportId}.${subscriberId}`),
		stopAddress,
	};
}

export const unsubscribeAddressOf = (subscriberId: string) =>
	`${env().BASE_URL}/unsubscribe/${tokenOf("unsubscribe", subscriberId)}`;

/** Asks an address whether it really wants reports. */
export async function confirmSubscription({ requestId }: { requestId: string }): Promise<void> {
	const request = await scopedTransaction(none, (trx) => findRequest(trx, requestId));
	if (!request) return;
	const { language, email } = request;
	const t = await mailWords(language);
	const link = `${env().BASE_URL}/subscribe/${tokenOf("confirm subscription", requestId)}`;
	const letter = writeConfirmLetter({ language, network: senderName(), link }, t);
	await deliver({
		to: { name: "", address: email },
		subject: letter.subject,
		text: asText(letter),
		html: asHtml(letter),
		language,
		messageId: messageIdOf(requestId),
		stopAddress: null,
	});
}

/** Forgets what nobody confirmed. */
export async function sweepSubscriptions(): Promise<void> {
	await scopedTransaction(none, sweepRequests);
}

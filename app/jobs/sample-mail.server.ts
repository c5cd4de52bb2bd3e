import { randomUUID } from "node:crypto";
import { sql } from "kysely";
import { scopedTransaction, type Trx } from "#app/auth/scope.server.ts";
import type { Words } from "#app/collect/form.ts";
import type { Mailing } from "#app/collect/survey-mailing.server.ts";
import type { Language } from "#app/i18n/language.ts";
import { env } from "#app/lib/env.server.ts";
import type { LetterKind } from "#app/mail/templates.ts";
import { type OutgoingMail, sendMail as deliver } from "#app/mail/transport.server.ts";
import { mailWords } from "#app/mail/words.server.ts";
import { composeMail } from "./compose-mail.server.ts";

export type SampleSurvey = {
	surveyId: string;
	title: Words;
	season: number;
	minutes: number;
	closesAt: Date;
	timeZone: string;
};
type Sample = { survey: SampleSurvey; kind: LetterKind; language: Language; to?: { name: string; address: string } };

const nobody = "00000000-0000-0000-0000-000000000000";

/** A mail of a survey as an invented grower would get it; its links lead nowhere. */
export async function composeSample({ survey, kind, language, to }: Sample): Promise<OutgoingMail> {
	const t = await mailWords(language);
	const now = new Date();
	const mailing: Mailing = {
		mailing_id: randomUUID(),
		survey_id: survey.surveyId,
		operation_id: nobody,
		kind,
		wave: 1,
		tried_at: null,
		sent_at: null,
		failed_at: null,
		disposition: "not_reached",
		season: survey.season,
		title: survey.title,
		closes_at: survey.closesAt,
		minutes: survey.minutes,
		is_open: true,
		operation_name: t("mail:sample.operation"),
		contact_name: t("mail:sample.contact"),
		email: null,
		county_fips: "",
		mail_returned_at: null,
		mail_wanted: true,
		status: "active",
		language,
		time_zone: survey.timeZone,
		response_language: language,
		receipt_code: "KD7M-3XRA",
		submitted_at: now,
		late_at: null,
		withdrawn_at: null,
		replaced: false,
	};
	const hasLink = kind === "invitation" || kind === "reminder";
	const mail = await composeMail(mailing, hasLink ? `${env().BASE_URL}/r/${t("mail:sample.token")}` : null);
	return { ...mail, to: to ?? mail.to };
}

/** Sends an associate a sample, marked as one. An account without an address gets none. */
export async function sendSample(sample: {
	surveyId: string;
	personId: string;
	kind: LetterKind;
	language: Language;
}): Promise<void> {
	const found = await scopedTransaction({ kind: "network" }, async (trx) => ({
		survey: await findSampleSurvey(trx, sample.surveyId),
		person: await trx
			.selectFrom("auth.person")
			.select(["display_name", "email"])
			.where("person_id", "=", sample.personId)
			.executeTakeFirst(),
	}));
	if (!found.survey || !found.person?.email) return;
	const to = { name: found.person.display_name, address: found.person.email };
	const mail = await composeSample({ ...sample, survey: found.survey, to });
	const t = await mailWords(sample.language);
	await deliver({ ...mail, subject: t("mail:sample.subject", { subject: mail.subject }) });
}

async function findSampleSurvey(trx: Trx, surveyId: string): Promise<SampleSurvey | undefined> {
	const row = await trx
		.selectFrom("collect.survey as s")
		.innerJoin("collect.form_version as v", "v.form_version_id", "s.form_version_id")
		.where("s.survey_id", "=", surveyId)
		.select([
			"s.survey_id as surveyId",
			"s.title",
			"s.season",
			"s.closes_at as closesAt",
			sql<string>`collect.clock_of_survey(s.survey_id)`.as("timeZone"),
			sql<number>`(v.definition ->> 'minutes')::int`.as("minutes"),
		])
		.executeTakeFirst();
	return row && { ...row, title: row.title as Words };
}

import type { TFunction } from "i18next";
import type { Formatter } from "#app/lib/format.ts";
import type { Letter } from "./letter.ts";

/** What the three letters to a grower are filled from; every field is plain text. */
export type LetterFields = {
	kind: "invitation" | "reminder" | "receipt";
	language: "en" | "es";
	network: string;
	contactName: string;
	operationName: string;
	surveyTitle: string;
	season: number;
	minutes: number;
	closesAt: Date;
	timeZone: string;
	/** The personal link; a receipt has none, as the answers can be amended through the link that is already there. */
	link: string | null;
	receipt: { code: string; submittedAt: Date } | null;
};

/** Writes the letter of a mailing. Its words are `mail:<kind>.…`, one paragraph a key, in the order of `paragraphKeys`. */
export function writeLetter(fields: LetterFields, t: TFunction, format: Formatter): Letter {
	const { kind, receipt, timeZone } = fields;
	const values = {
		network: fields.network,
		contact: fields.contactName,
		operation: fields.operationName,
		survey: fields.surveyTitle,
		season: String(fields.season),
		closes: format.moment(fields.closesAt, timeZone),
		code: receipt?.code ?? "",
		submitted: receipt ? format.moment(receipt.submittedAt, timeZone) : "",
		count: fields.minutes,
	};
	const say = (key: string) => t(`mail:${kind}.${key}`, values);
	const button = fields.link ? [{ link: fields.link, label: t(`mail:${kind}.button`) }] : [];
	const greeting = fields.contactName ? t("mail:greeting", values) : t("mail:greeting_unnamed");
	return {
		language: fields.language,
		subject: say("subject"),
		heading: say("heading"),
		paragraphs: [greeting, say("what"), ...button, say("until"), say("pledge"), say("help")],
		footer: t("mail:footer", values),
	};
}

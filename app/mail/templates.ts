import type { TFunction } from "i18next";
import type { Formatter } from "#app/lib/format.ts";
import type { Letter, Paragraph } from "./letter.ts";

export const letterKinds = ["invitation", "reminder", "receipt", "thank_you"] as const;
export type LetterKind = (typeof letterKinds)[number];

/** What the letters to a grower are filled from; every field is plain text. */
export type LetterFields = {
	kind: LetterKind;
	language: "en" | "es";
	network: string;
	contactName: string;
	operationName: string;
	surveyTitle: string;
	season: number;
	minutes: number;
	closesAt: Date;
	timeZone: string;
	/** The personal link, or the comparison's; a receipt has none, as the link that is already there works on. */
	link: string | null;
	/** The published map at the operation's county. */
	mapLink: string;
	/** A published figure around the operation, for a thank-you; null where none is shown. */
	beside: string | null;
	/** Where mail of this kind is stopped; null where it was asked for. */
	stopAddress: string | null;
	/** `isLate` when the answers came after the closing. */
	receipt: { code: string; submittedAt: Date; isLate: boolean } | null;
};

/** Writes the letter of a mailing. Its words are `mail:<kind>.…`, one paragraph a key. */
export function writeLetter(fields: LetterFields, t: TFunction, format: Formatter): Letter {
	const { kind, link, mapLink, stopAddress } = fields;
	const values = valuesOf(fields, format);
	const say = (key: string) => t(`mail:${kind}.${key}`, values);
	const button: Paragraph[] = link ? [{ link, label: t(`mail:${kind}.button`) }] : [];
	const greeting = fields.contactName ? t("mail:greeting", values) : t("mail:greeting_unnamed");
	const body: Paragraph[] =
		kind === "thank_you"
			? [
					say("what"),
					...(fields.beside ? [fields.beside] : []),
					...button,
					say("sign_in"),
					{ link: mapLink, label: t("mail:thank_you.map") },
					say("help"),
				]
			: [say("what"), ...button, say(fields.receipt?.isLate ? "late" : "until"), say("pledge"), say("help")];
	return {
		language: fields.language,
		subject: say("subject"),
		heading: say("heading"),
		paragraphs: [greeting, ...body],
		footer: [t("mail:footer", values), stopAddress ? t("mail:stop.why") : t("mail:stop.receipt")].join("\n"),
		stop: stopAddress ? { link: stopAddress, label: t("mail:stop.link") } : null,
	};
}

function valuesOf(fields: LetterFields, format: Formatter) {
	const { receipt, timeZone } = fields;
	return {
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
}

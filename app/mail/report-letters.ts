import type { TFunction } from "i18next";
import type { Letter, Paragraph } from "./letter.ts";

export type ReportLetter = {
	language: "en" | "es";
	network: string;
	title: string;
	/** The report's summary, its figures in words. */
	summary: string;
	/** Further figures, each a whole line. */
	figures: string[];
	/** What a correction changed and why; null for a new report. */
	correction: string | null;
	link: string;
	pdfLink: string | null;
	changeAddress: string;
	stopAddress: string;
};

/** The mail that brings a published report to somebody who asked for it. */
export function writeReportLetter(fields: ReportLetter, t: TFunction): Letter {
	const { language, title, network, correction, pdfLink } = fields;
	const paragraphs: Paragraph[] = [
		...(correction ? [t("report:mail.corrected"), correction] : []),
		fields.summary,
		...fields.figures,
		{ link: fields.link, label: t("report:mail.read") },
		...(pdfLink ? [{ link: pdfLink, label: t("report:mail.pdf") }] : []),
		t("report:mail.caution"),
	];
	return {
		language,
		subject: correction ? t("report:mail.subjectCorrected", { title }) : title,
		heading: title,
		paragraphs,
		footer: t("report:mail.footer", { network }),
		change: { link: fields.changeAddress, label: t("report:mail.change") },
		stop: { link: fields.stopAddress, label: t("report:mail.stop") },
	};
}

/** The mail that asks whether an address really wants reports. It says so to nobody else, and nothing happens without its link. */
export function writeConfirmLetter(
	{ language, network, link }: { language: "en" | "es"; network: string; link: string },
	t: TFunction,
): Letter {
	return {
		language,
		subject: t("report:confirmMail.subject", { network }),
		heading: t("report:confirmMail.heading"),
		paragraphs: [
			t("report:confirmMail.what", { network }),
			{ link, label: t("report:confirmMail.button") },
			t("report:confirmMail.otherwise"),
		],
		footer: network,
		stop: null,
	};
}

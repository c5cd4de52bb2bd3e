import type { TFunction } from "i18next";
import type { Letter, Paragraph } from "./letter.ts";

export type ChangeLetter = {
	language: "en" | "es";
	network: string;
	change: "revised" | "withdrawn";
	/** The release that is new or was withdrawn, and its name in words. */
	number: number;
	named: string;
	/** Why, in the words of who approved it. */
	reason: string;
	/** Figures told differently: so many, and the first of them, each a whole line. Null where they cannot be compared. */
	changed: { total: number; value: string; lines: string[] } | null;
	link: string;
	stopAddress: string;
};

/** The mail that tells a follower that released figures were revised or withdrawn. */
export function writeChangeLetter(fields: ChangeLetter, t: TFunction): Letter {
	const { language, network, change, number, named, reason, changed, link } = fields;
	const rest = changed ? changed.total - changed.lines.length : 0;
	const paragraphs: Paragraph[] = [
		t(`dataroom:changeMail.${change}.what`, { named }),
		t("dataroom:changeMail.reason", { reason }),
		...(changed ? [t("dataroom:changeMail.count", { count: changed.total, value: changed.value })] : []),
		...(changed && changed.lines.length > 0 ? [changed.lines.join("\n")] : []),
		...(rest > 0 ? [t("dataroom:changeMail.rest")] : []),
		{ link, label: t(`dataroom:changeMail.${change}.link`) },
		t(`dataroom:changeMail.${change}.use`),
	];
	return {
		language,
		subject: t(`dataroom:changeMail.${change}.subject`, { number, named }),
		heading: t(`dataroom:changeMail.${change}.heading`, { number }),
		paragraphs,
		footer: t("dataroom:changeMail.footer", { network }),
		stop: { link: fields.stopAddress, label: t("dataroom:changeMail.stop") },
	};
}

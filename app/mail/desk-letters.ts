import type { TFunction } from "i18next";
import type { Letter } from "./letter.ts";

type DeskLetter = { language: "en" | "es"; network: string; link: string };
type GrantEnd = DeskLetter & { name: string; role: string; stateFips: string | null; day: string };

/** A role as a letter names it: with the states that it is for. */
function roleWords(role: string, states: string[], t: TFunction): string {
	const named = t(`common:role.${role}`);
	return states.length > 0 ? t("mail:roleIn", { role: named, states: states.join(", ") }) : named;
}

/** Tells somebody that a role ends soon. */
export function writeGrantEndLetter({ language, network, link, name, ...grant }: GrantEnd, t: TFunction): Letter {
	const states = grant.stateFips ? [t(`common:state.${grant.stateFips}`)] : [];
	const values = { network, name, day: grant.day, role: roleWords(grant.role, states, t) };
	return {
		language,
		subject: t("mail:grantEnd.subject", values),
		heading: t("mail:grantEnd.heading", values),
		paragraphs: [
			t("mail:grantEnd.greeting", values),
			t("mail:grantEnd.what", values),
			...(grant.role === "researcher"
				? [t("mail:grantEnd.helpResearcher"), { link, label: t("mail:grantEnd.buttonResearcher") }]
				: [{ link, label: t("mail:grantEnd.button") }, t("mail:grantEnd.help")]),
		],
		footer: network,
		stop: null,
	};
}

type Invitation = DeskLetter & {
	role: "associate" | "coordinator" | "researcher";
	stateFips: string[];
	inviter: string;
	/** The last day of the role, in words, or null where it has none. */
	endsOn: string | null;
	/** Until when the link works, in words. */
	until: string;
};

/** Invites somebody to a role. Its link alone gives no rights: the address must be theirs by the sign-in's word too. */
export function writeInvitationLetter({ language, network, link, ...invited }: Invitation, t: TFunction): Letter {
	const states = invited.stateFips.map((state) => t(`common:state.${state}`));
	const values = {
		network,
		inviter: invited.inviter,
		day: invited.endsOn ?? "",
		until: invited.until,
		role: roleWords(invited.role, states, t),
	};
	return {
		language,
		subject: t("mail:invited.subject", values),
		heading: t("mail:invited.heading", values),
		paragraphs: [
			t("mail:invited.what", values),
			...(invited.endsOn ? [t("mail:invited.ends", values)] : []),
			{ link, label: t("mail:invited.button") },
			t("mail:invited.how"),
			t("mail:invited.until", values),
			t("mail:invited.otherwise"),
		],
		footer: network,
		stop: null,
	};
}

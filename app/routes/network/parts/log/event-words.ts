import type { TFunction } from "i18next";
import type { LoggedEvent } from "#app/auth/event-list.server.ts";
import { wordsIn } from "#app/i18n/language.ts";
import type { Formatter } from "#app/lib/format.ts";

type EventWords = { t: TFunction; format: Formatter; language: string; timeZone: string };
export type SaidEvent = { who: string; nobody: boolean; what: string; about: string[] };

/** An event in words, for the page and the file alike. @param said.t of the network's words. */
export function eventWords(event: LoggedEvent, said: EventWords): SaidEvent {
	return {
		who: whoWords(event, said),
		nobody: !event.person && !isForgotten(event),
		what: actionWords(event.action, said.t),
		about: aboutWords(event, said),
	};
}

/** Whoever leaves is not named, not even in the log of it. */
const isForgotten = ({ person, action }: LoggedEvent) =>
	person ? person.name === "" : action === "operation.left" || action === "response.withdrawn";

function whoWords(event: LoggedEvent, { t }: EventWords): string {
	if (isForgotten(event)) return t("network:log.forgotten");
	if (event.person) return event.person.name;
	if (event.told.byLink) return t("network:log.byLink");
	return event.action === "auth.sign_in_failed" ? t("network:log.nobody") : t("network:log.itself");
}

export function actionWords(action: string, t: TFunction): string {
	const [subject, verb] = action.split(".");
	// A row that an earlier version of the product wrote may have no words any more.
	return t(`network:log.action.${subject}.${verb}`, { defaultValue: action });
}

/** Whom or what it was about, a line each. Growers are told by state: who answered is the desk's to see. */
function aboutWords(event: LoggedEvent, { t, format, language, timeZone }: EventWords): string[] {
	const { about, person, survey, form, stateFips, told, action } = event;
	const state = stateFips && t(`common:state.${stateFips}`);
	const role = told.role && t(`common:role.${told.role}`);
	const ofGrower = /^(response|operation|finding)\./.test(action) || action === "survey.link_replaced";
	const count = (value: number) => ({ count: value, value: format.number(value) });
	const lines = [
		about !== person?.name && about !== "" && about,
		role && (state ? t("network:people.roleIn", { role, state }) : role),
		survey && t("network:log.survey", { title: wordsIn(survey.title, language), season: survey.season }),
		form && wordsIn(form, language),
		action.startsWith("form.") && told.version !== undefined && t("network:log.version", { version: told.version }),
		ofGrower && state && t("network:log.grower", { state }),
		action.startsWith("district.") && state,
		told.number !== undefined && t("network:log.release", { number: told.number }),
		told.slug,
		told.operations !== undefined && t("network:log.operations", count(told.operations)),
		told.queued !== undefined && t("network:log.queued", count(told.queued)),
		told.growers !== undefined && t("network:log.growers", count(told.growers)),
		told.events !== undefined && t("network:log.events", count(told.events)),
		told.to && t("network:log.to", { moment: format.moment(told.to, timeZone) }),
	];
	return lines.filter((line) => typeof line === "string");
}

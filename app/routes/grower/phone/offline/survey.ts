import { withTyped } from "#app/collect/answers-here.ts";
import { emptyOutbox } from "#app/collect/outbox.ts";
import type { ReadSettings } from "#app/collect/read-question.ts";
import type { Asking } from "#app/collect/steps.ts";
import type { Pack } from "../pack.ts";
import { placeIn } from "../place.ts";
import type { Held, PhoneStore } from "../store.ts";

/** The survey that an address belongs to, as this phone holds it. */
export type SurveyHere = {
	pack: Pack;
	held: Held;
	/** The form with the answers as they will stand at the server. */
	asking: Asking;
	reading: ReadSettings;
};

/** @returns undefined where this phone holds no such survey, or not for the session that was last open. */
export async function findSurvey(store: PhoneStore, pathname: string): Promise<SurveyHere | undefined> {
	const place = placeIn(pathname);
	const pack = (await store.listPacks()).find(
		(one) => one.surveyId === place?.surveyId && one.operationId === place.operationId,
	);
	if (!pack) return undefined;
	const { responseId, surveyId, operationId, holder, definition, plantings, answers } = pack;
	const held = (await store.read(responseId)) ?? { responseId, surveyId, operationId, holder, outbox: emptyOutbox };
	const reading = { language: pack.language, season: pack.season, today: latestDay(pack) };
	return { pack, held, reading, asking: withTyped({ definition, plantings, answers }, held.outbox, reading) };
}

/** A phone whose clock is behind would take today for a day still to come; the server knew better when it was last asked. */
function latestDay({ timeZone, today }: Pack): string {
	const here = new Intl.DateTimeFormat("sv-SE", { timeZone }).format(new Date());
	return here > today ? here : today;
}

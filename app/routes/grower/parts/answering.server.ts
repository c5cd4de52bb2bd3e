import type { RouterContextProvider } from "react-router";
import { requireGrower } from "#app/auth/guard.server.ts";
import { holderOf } from "#app/auth/holder.server.ts";
import { withPosted } from "#app/auth/posted-form.server.ts";
import { type Answering, findAnswering } from "#app/collect/responses.server.ts";
import type { Grower } from "#app/auth/viewer.ts";
import { refusal } from "#app/lib/refusal.ts";

/** `holder` is whose session it is, as a short hash. */
export type OpenAnswering = Answering & { holder: string };
export type Place = { surveyId: string; operationId: string };

/**
 * The survey that somebody may answer now, with what was answered so far.
 * @throws refusal 401 or 404 for who may not, 410 when it is closed and what was begun has had its time.
 */
export async function getAnswering(context: Readonly<RouterContextProvider>, place: Place): Promise<OpenAnswering> {
	const grower = requireGrower(context, place);
	const answering = await grower.transaction((trx) => findAnswering(trx, grower.viewer, place));
	if (!answering) throw refusal("survey_not_found");
	if (!answering.isOpen && !answering.isLate) throw refusal("survey_closed");
	return { ...answering, holder: holderOfGrower(grower.viewer) };
}

/** Who sends a screen; a refusal gives back what was sent. */
export async function requireSender(context: Readonly<RouterContextProvider>, place: Place, request: Request) {
	try {
		return requireGrower(context, place);
	} catch (refused) {
		throw await withPosted(refused, request);
	}
}

function holderOfGrower({ link, person }: Grower): string {
	return link ? holderOf("link", link.personalLinkId) : holderOf("person", String(person?.personId));
}

/** The day it is at the operation, for answers that must not lie in the future. */
export function todayIn(timeZone: string, now = new Date()): string {
	return new Intl.DateTimeFormat("sv-SE", { timeZone }).format(now);
}

import type { Trx } from "#app/auth/scope.server.ts";
import type { Grower } from "#app/auth/viewer.ts";
import { type AnswerPlace, findPlace } from "./answer-place.server.ts";
import { FormDefinition } from "./form.ts";
import { viewSubmissions } from "./submission-view.server.ts";
import { listReleased } from "./withdrawal.server.ts";

/**
 * What a grower sent in for one survey, each time, with the one wanted question by question.
 * @param version which time; without it, or where there is no such, the newest.
 * @returns undefined where the operation is not the viewer's, was not asked, or has never sent anything in.
 */
export async function findOwnAnswers(trx: Trx, viewer: Grower, place: AnswerPlace, version?: number) {
	const asked = await findPlace(trx, viewer, place);
	if (!asked?.response) return undefined;
	const { title, season, operationName, timeZone, isOpen, closesAt, response } = asked;
	const definition = FormDefinition.parse(asked.definition);
	const view = await viewSubmissions(trx, definition, response.responseId, { version, withdrawn: true });
	if (view.shownVersion === null) return undefined;
	// A release rests on what was sent in time, never on what came late.
	const released = response.submittedAt !== null && (await listReleased(trx, [place.surveyId])).has(place.surveyId);
	return {
		title,
		season,
		operationName,
		timeZone,
		isOpen,
		closesAt,
		receiptCode: response.receiptCode,
		withdrawnAt: response.withdrawnAt,
		/** Why an answer that was sent in can still be withdrawn or not; null where there is none to withdraw. */
		withdrawal:
			response.submittedAt === null && response.lateAt === null
				? null
				: released
					? ("released" as const)
					: ("possible" as const),
		...view,
	};
}

import { data, href, redirect } from "react-router";
import type { Route } from "./+types/review";
import { requireGrower } from "#app/auth/guard.server.ts";
import { listAnswerLines } from "#app/collect/answer-lines.ts";
import { listSteps } from "#app/collect/steps.ts";
import { submitResponse } from "#app/collect/submission.server.ts";
import { getLanguage } from "#app/i18n/middleware.server.ts";
import { refusal } from "#app/lib/refusal.ts";
import { getAnswering } from "./parts/answering.server.ts";
import { phonePart } from "./parts/phone.server.ts";
import { ReviewView } from "./parts/review-view.tsx";

/** As on a screen: forms, links and one small script. */
export const handle = { bare: true };

export async function loader({ context, params }: Route.LoaderArgs) {
	const answering = await getAnswering(context, params);
	const { definition, plantings, answers, response } = answering;
	if (!response) throw redirect(href("/answer/:surveyId/:operationId", params), 303);
	const steps = listSteps(definition, plantings, answers);
	return {
		groups: listAnswerLines(definition, plantings, answers),
		steps: steps.map(({ key, screen, planting }) => ({ key, screen: { title: screen.title }, planting })),
		closesAt: answering.closesAt,
		isLate: answering.isLate,
		isRehearsal: answering.isRehearsal,
		timeZone: answering.timeZone,
		sent: response.receiptCode !== null,
		changed: response.changedSinceSubmission,
		phone: phonePart(answering, getLanguage(context)),
	};
}

export async function action({ context, params }: Route.ActionArgs) {
	const grower = requireGrower(context, params);
	const language = getLanguage(context);
	const outcome = await grower.transaction((trx) => submitResponse(trx, grower.viewer, params, language));
	if (outcome === "not_found") throw refusal("survey_not_found");
	if (outcome === "closed") throw refusal("survey_closed");
	if (outcome === "not_started") return redirect(href("/answer/:surveyId/:operationId", params), 303);
	if (outcome.outcome === "unfinished" || outcome.outcome === "to_check") return data(outcome, { status: 400 });
	return redirect(href("/answer/:surveyId/:operationId/receipt", params), 303);
}

export default function Review({ loaderData, actionData, params }: Route.ComponentProps) {
	return <ReviewView {...loaderData} refused={actionData} place={params} />;
}

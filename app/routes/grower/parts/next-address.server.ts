import { href, type RouterContextProvider } from "react-router";
import { listChecksToAsk } from "#app/collect/checks-to-ask.ts";
import { listSteps } from "#app/collect/steps.ts";
import { getAnswering, type Place } from "./answering.server.ts";

/** The same step while its answers are to be confirmed, else the next one, or the review where somebody came from there. */
export async function nextAddress(
	context: Readonly<RouterContextProvider>,
	params: Place & { screen: string },
	request: Request,
): Promise<string> {
	const { search, searchParams } = new URL(request.url);
	const answering = await getAnswering(context, params);
	const again = href("/answer/:surveyId/:operationId/ask/:screen", params) + search;
	if (listChecksToAsk(answering, params.screen).length > 0) return again;
	const review = href("/answer/:surveyId/:operationId/review", params);
	if (searchParams.has("review")) return review;
	const { definition, plantings, answers } = answering;
	const steps = listSteps(definition, plantings, answers);
	const next = steps[steps.findIndex(({ key }) => key === params.screen) + 1];
	return next ? href("/answer/:surveyId/:operationId/ask/:screen", { ...params, screen: next.key }) : review;
}

import { type ActionFunctionArgs, data, href, type LoaderFunctionArgs, redirect, redirectDocument } from "react-router";
import { listAnswerLines } from "#app/collect/answer-lines.ts";
import { listChecksToAsk } from "#app/collect/checks-to-ask.ts";
import { askToSendIn, typedStep } from "#app/collect/outbox.ts";
import { readPostedStep } from "#app/collect/posted-step.ts";
import { findHindrance, findOpenStep } from "#app/collect/progress.ts";
import { showStep } from "#app/collect/show-step.ts";
import { listSteps } from "#app/collect/steps.ts";
import { record } from "../ask-page.ts";
import { valuesOf } from "../form-values.ts";
import type { Pack } from "../pack.ts";
import { here } from "./here.ts";
import { findSurvey, type SurveyHere } from "./survey.ts";

/* The loaders and actions of the survey's pages as the phone itself answers them, with the same reading and the same checks. */
type Place = { surveyId: string; operationId: string };

const placeOf = ({ surveyId, operationId }: Pack): Place => ({ surveyId, operationId });
const askAddress = (place: Place, screen: string) =>
	href("/answer/:surveyId/:operationId/ask/:screen", { ...place, screen });
const reviewAddress = (place: Place) => href("/answer/:surveyId/:operationId/review", place);

/** The survey with what was typed so far. @throws a load of the server's own page, as soon as there is one again. */
async function surveyAt({ request }: LoaderFunctionArgs): Promise<SurveyHere> {
	if (here.ask) await record(here.ask);
	const survey = here.reachable ? undefined : await findSurvey(here.store, new URL(request.url).pathname);
	if (!survey) throw redirectDocument(request.url);
	return survey;
}

function phoneOf({ responseId, holder, today, sent, changes, version, ...pack }: Pack) {
	return {
		...placeOf({ ...pack } as Pack),
		responseId,
		holder,
		told: { answers: [], changes, today, sent, packVersion: version },
	};
}

export async function loadStart(args: LoaderFunctionArgs) {
	const { pack, asking } = await surveyAt(args);
	const open = findOpenStep(asking.definition, asking.plantings, asking.answers);
	return redirect(open ? askAddress(placeOf(pack), open.key) : reviewAddress(placeOf(pack)));
}

export async function loadScreen(args: LoaderFunctionArgs) {
	const { pack, held, asking } = await surveyAt(args);
	const stepKey = args.params.screen ?? "";
	const { massUnit, crates, earlier, language, changes } = pack;
	const shown = showStep(asking, changes, stepKey, { massUnit, crates, earlier, language });
	if (!shown) throw redirect(href("/answer/:surveyId/:operationId", placeOf(pack)));
	const version = typedStep(held.outbox, stepKey)?.seen ?? shown.version;
	return { shown: { ...shown, version }, place: placeOf(pack), phone: phoneOf(pack) };
}

/** Goes on as the server does: what is to be mended or confirmed first, else the next screen, or back to the review. */
export async function goOnFromScreen(args: ActionFunctionArgs) {
	const values = valuesOf(await args.request.formData());
	const stepKey = args.params.screen ?? "";
	if (here.ask && here.ask.page.stepKey === stepKey) await record(here.ask, { values });
	const { pack, asking, reading } = await surveyAt(args);
	const posted = readPostedStep(asking, stepKey, values, reading);
	if (!posted) return redirect(href("/answer/:surveyId/:operationId", placeOf(pack)));
	const { questions, problems } = posted;
	if (problems.length > 0)
		return data({ values, questions, problems, seen: undefined, unsure: [], elsewhere: null }, { status: 400 });
	const { pathname, search, searchParams } = new URL(args.request.url);
	if (listChecksToAsk(asking, stepKey).length > 0) return redirect(pathname + search);
	const steps = listSteps(asking.definition, asking.plantings, asking.answers);
	const next = steps[steps.findIndex(({ key }) => key === stepKey) + 1];
	const isFromReview = searchParams.has("review") || !next;
	return redirect(isFromReview ? reviewAddress(placeOf(pack)) : askAddress(placeOf(pack), next.key));
}

export async function loadReview(args: LoaderFunctionArgs) {
	const { pack, held, asking } = await surveyAt(args);
	const { definition, plantings, answers } = asking;
	return {
		groups: listAnswerLines(definition, plantings, answers),
		steps: listSteps(definition, plantings, answers),
		closesAt: new Date(pack.closesAt),
		timeZone: pack.timeZone,
		sent: pack.sent,
		changed: pack.sent && Object.keys(held.outbox.steps).length > 0,
		place: placeOf(pack),
		phone: phoneOf(pack),
	};
}

/** Takes the grower's word that the answers are to be sent in; they are when there is signal. */
export async function sendInLater(args: ActionFunctionArgs) {
	const { pack, held, asking } = await surveyAt(args);
	const hindrance = findHindrance(asking);
	if (hindrance) return data(hindrance, { status: 400 });
	await here.store.change(pack.responseId, (before) => {
		const now = before ?? held;
		return { ...now, outbox: askToSendIn(now.outbox, true) };
	});
	return redirect(href("/answer/:surveyId/:operationId/receipt", placeOf(pack)));
}

export async function loadReceipt(args: LoaderFunctionArgs) {
	const { pack, held } = await surveyAt(args);
	if (!held.outbox.sendIn) throw redirect(reviewAddress(placeOf(pack)));
	return { review: reviewAddress(placeOf(pack)) };
}

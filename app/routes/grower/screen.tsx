import { data, href, redirect } from "react-router";
import type { Route } from "./+types/screen";
import { listDifferences } from "#app/collect/answer-lines.ts";
import { keepStep } from "#app/collect/keep-step.server.ts";
import { type PostedStep, readPostedStep } from "#app/collect/posted-step.ts";
import { postedText, type StepValues } from "#app/collect/posted.ts";
import type { Answering } from "#app/collect/responses.server.ts";
import { showStep } from "#app/collect/show-step.ts";
import { changeOf, judgeChange, type SentChange, unsureNow, versionOf } from "#app/collect/step-change.ts";
import { getLanguage } from "#app/i18n/middleware.server.ts";
import { refusal } from "#app/lib/refusal.ts";
import { getAnswering, requireSender, todayIn } from "./parts/answering.server.ts";
import { nextAddress } from "./parts/next-address.server.ts";
import { phonePart } from "./parts/phone.server.ts";
import { holdsFiles, takePhotoScreen } from "./parts/photo-screen.server.ts";
import { readPosted } from "./parts/posted.server.ts";
import { ScreenView } from "./parts/screen-view.tsx";

/** The page needs no framework in the browser: it goes by forms and links, and one small script of its own. */
export const handle = { bare: true };

export async function loader({ context, params }: Route.LoaderArgs) {
	const answering = await getAnswering(context, params);
	const { response, massUnit, crates, earlier } = answering;
	if (!response) throw redirect(href("/answer/:surveyId/:operationId", params), 303);
	const settings = { massUnit, crates, earlier, language: getLanguage(context) };
	const shown = showStep(answering, response.stepChanges, params.screen, settings);
	if (!shown) throw refusal("page_not_found");
	return { ...shown, isLate: answering.isLate, phone: phonePart(answering, settings.language) };
}

export async function action({ context, params, request }: Route.ActionArgs) {
	const grower = await requireSender(context, params, request);
	if (holdsFiles(request)) return takePhotoScreen({ context, params, request });
	const { values, sent } = await readPosted(request);
	const answering = await getAnswering(context, params);
	const posted = readPostedStep(answering, params.screen, values, {
		language: getLanguage(context),
		season: answering.season,
		today: todayIn(answering.timeZone),
	});
	if (!posted) throw refusal("page_not_found");
	const { step, answers, problems } = posted;
	if (problems.length > 0) return showProblems(answering, posted, values, sent);

	const kept = await grower.transaction((trx) => keepStep(trx, grower.viewer, params, step.key, answers, { sent }));
	if (kept === "closed") throw refusal("survey_closed");
	if (kept === "not_found") throw refusal("survey_not_found");
	if (kept === "step_not_found") throw refusal("page_not_found");
	if (kept === "not_started") return redirect(href("/answer/:surveyId/:operationId", params), 303);
	if (kept.outcome === "changed_elsewhere") return showBoth(await getAnswering(context, params), posted, values);
	return redirect(await nextAddress(context, params, request), 303);
}

/** What is to be mended; whoever would mend must first know where another device has changed the step meanwhile. */
function showProblems(answering: Answering, posted: PostedStep, values: StepValues, sent: SentChange | undefined) {
	const { step, questions, problems } = posted;
	const newest = changeOf(answering.response?.stepChanges ?? {}, step.key);
	if (sent && judgeChange(newest, sent, false) === "changed_elsewhere") return showBoth(answering, posted, values);
	return data(
		{ values, questions, problems, seen: sent?.seen, unsure: unsureNow(sent), elsewhere: null },
		{ status: 400 },
	);
}

/** What was typed beside what another device has given, to choose from. */
function showBoth(answering: Answering, { step, questions, answers, problems }: PostedStep, values: StepValues) {
	const unread = new Map(problems.map(({ field }) => [field, postedText(values, field)]));
	const elsewhere = listDifferences(answering, step.key, answers, unread);
	const seen = versionOf(answering.response?.stepChanges ?? {}, step.key);
	return data({ values, questions, problems: [], seen, unsure: [], elsewhere }, { status: 409 });
}

export default function ScreenPage({ loaderData, actionData, params }: Route.ComponentProps) {
	return <ScreenView shown={loaderData} posted={actionData} place={params} phone={loaderData.phone} />;
}

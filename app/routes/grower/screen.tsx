import { useEffect, useRef } from "react";
import { useTranslation } from "react-i18next";
import { data, Form, href, Link, redirect, useNavigation } from "react-router";
import type { Route } from "./+types/screen";
import { requireGrower } from "#app/auth/guard.server.ts";
import { listDifferences } from "#app/collect/answer-lines.ts";
import { listOpenChecks } from "#app/collect/checks.ts";
import { listChecksToAsk } from "#app/collect/checks-to-ask.ts";
import { keepStep } from "#app/collect/keep-step.server.ts";
import { problemOf, readPostedStep } from "#app/collect/posted-step.ts";
import { versionOf } from "#app/collect/step-change.ts";
import { valuesOf } from "#app/collect/step-values.ts";
import { listSteps, questionsAsked } from "#app/collect/steps.ts";
import { Button } from "#app/components/button.tsx";
import { ErrorSummary } from "#app/components/error-summary.tsx";
import { Page } from "#app/components/page.tsx";
import { TallyStrokes } from "#app/components/tally-strokes.tsx";
import { wordsIn } from "#app/i18n/language.ts";
import { getLanguage } from "#app/i18n/middleware.server.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import { refusal } from "#app/lib/refusal.ts";
import { getAnswering, todayIn } from "./parts/answering.server.ts";
import { ChangedElsewhere } from "./parts/changed-elsewhere.tsx";
import { CheckNotice } from "./parts/check-notice.tsx";
import { labelOf, QuestionField } from "./parts/question-field.tsx";
import { ScreenUnknown } from "./parts/unknown-boxes.tsx";
import { readPosted } from "./parts/posted.server.ts";
import { useStepTitle } from "./parts/step-title.ts";

export async function loader({ context, params }: Route.LoaderArgs) {
	const answering = await getAnswering(context, params);
	if (!answering.response) throw redirect(href("/answer/:surveyId/:operationId", params), 303);
	const { definition, plantings, answers, massUnit, crates } = answering;
	const steps = listSteps(definition, plantings, answers);
	const at = steps.findIndex((step) => step.key === params.screen);
	const step = steps[at];
	if (!step) throw refusal("page_not_found");
	const questions = questionsAsked(step, definition, plantings, answers);
	return {
		step,
		questions,
		version: versionOf(answering.response.stepChanges, step.key),
		checks: listChecksToAsk(answering, step.key),
		problems: listOpenChecks(answering)
			.filter((check) => check.kind === "hard" && check.step.key === step.key)
			.map(problemOf),
		values: valuesOf(step, questions, answers, { massUnit, crates, language: getLanguage(context) }),
		number: at + 1,
		of: steps.length,
		previous: steps[at - 1]?.key ?? null,
	};
}

export async function action({ context, params, request }: Route.ActionArgs) {
	const grower = requireGrower(context, params);
	const { values, sent } = await readPosted(request);
	const answering = await getAnswering(context, params);
	const posted = readPostedStep(answering, params.screen, values, {
		language: getLanguage(context),
		season: answering.season,
		today: todayIn(answering.timeZone),
	});
	if (!posted) throw refusal("page_not_found");
	const { step, questions, answers, problems } = posted;
	const shown = { values, questions, seen: sent?.seen };
	if (problems.length > 0) return data({ ...shown, problems, elsewhere: null }, { status: 400 });

	const kept = await grower.transaction((trx) => keepStep(trx, grower.viewer, params, step.key, answers, { sent }));
	if (kept === "closed") throw refusal("survey_closed");
	if (kept === "not_found") throw refusal("survey_not_found");
	if (kept === "step_not_found") throw refusal("page_not_found");
	if (kept === "not_started") return redirect(href("/answer/:surveyId/:operationId", params), 303);
	if (kept.outcome === "changed_elsewhere") {
		const elsewhere = listDifferences(await getAnswering(context, params), step.key, answers);
		return data({ ...shown, problems: [], seen: kept.version, elsewhere }, { status: 409 });
	}
	return redirect(await nextAddress(context, params, request), 303);
}

/** The same step while its answers are to be confirmed, else the next one, or the review where somebody came from there. */
async function nextAddress(
	context: Route.ActionArgs["context"],
	params: Route.ActionArgs["params"],
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

export default function ScreenPage({ loaderData, actionData, params }: Route.ComponentProps) {
	const { t, i18n } = useTranslation("grower");
	const format = useFormat();
	const busy = useNavigation().state === "submitting";
	const { step, number, of, previous } = loaderData;
	const { questions, values, problems } = actionData ?? loaderData;
	const elsewhere = actionData?.elsewhere;
	const title = useStepTitle()(step);
	const help = step.screen.help && wordsIn(step.screen.help, i18n.language);
	const shared = new Set(step.screen.sumToHundred ?? []);
	useFocusOnArrival(step.key);
	return (
		<Page title={title} lead={help}>
			<div className="-mt-4 mb-6 flex items-center gap-3 text-base text-quiet">
				<TallyStrokes done={number - 1} all={of} />
				<span>{t("screen.progress", { number: format.number(number), of: format.number(of) })}</span>
			</div>
			<ErrorSummary
				problems={problems}
				labels={Object.fromEntries(
					questions.flatMap((question) => [
						[question.key, labelOf(question, i18n.language)],
						[`${question.key}_crate`, t("screen.crateWeight")],
					]),
				)}
			/>
			{/* A screen of its own: boxes of one step must not carry their text into the next. */}
			<Form key={step.key} method="post" noValidate>
				<input type="hidden" name="_seen" value={actionData?.seen ?? loaderData.version} />
				{elsewhere && <ChangedElsewhere lines={elsewhere} />}
				{!actionData && <CheckNotice checks={loaderData.checks} busy={busy} />}
				{questions.map((question) => (
					<QuestionField
						key={question.key}
						question={question}
						planting={step.planting}
						values={values}
						mayNotKnow={!shared.has(question.key)}
						problems={problems}
					/>
				))}
				{shared.size > 0 && <ScreenUnknown values={values} />}
				<div className="mt-8 flex flex-wrap items-center gap-4">
					<Button busy={busy}>{t(elsewhere ? "elsewhere.mine" : "common:button.continue")}</Button>
					<Link to={backAddress(params, previous)} className="inline-flex min-h-11 items-center">
						{t("common:button.back")}
					</Link>
				</div>
			</Form>
		</Page>
	);
}

function backAddress(params: Route.ComponentProps["params"], previous: string | null): string {
	return previous
		? href("/answer/:surveyId/:operationId/ask/:screen", { ...params, screen: previous })
		: href("/answer/:surveyId/:operationId", params);
}

/** A new screen begins at its heading, also for whoever cannot see that it changed. */
function useFocusOnArrival(key: string) {
	const shown = useRef(key);
	useEffect(() => {
		if (shown.current === key) return;
		shown.current = key;
		document.getElementById("content")?.focus();
	}, [key]);
}

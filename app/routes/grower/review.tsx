import { useTranslation } from "react-i18next";
import { data, Form, href, Link, redirect, useNavigation } from "react-router";
import type { Route } from "./+types/review";
import { requireGrower } from "#app/auth/guard.server.ts";
import { listAnswerLines } from "#app/collect/answer-lines.ts";
import { listSteps } from "#app/collect/steps.ts";
import { submitResponse } from "#app/collect/submission.server.ts";
import { AnswerList } from "#app/components/answer-list.tsx";
import { Button } from "#app/components/button.tsx";
import { Notice } from "#app/components/notice.tsx";
import { Page } from "#app/components/page.tsx";
import { getLanguage } from "#app/i18n/middleware.server.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import { refusal } from "#app/lib/refusal.ts";
import { getAnswering, phonePart } from "./parts/answering.server.ts";
import { KeptWord, PhonePart } from "./parts/phone-part.tsx";
import { useStepTitle } from "./parts/step-title.ts";

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
		timeZone: answering.timeZone,
		sent: response.receiptCode !== null,
		changed: response.changedSinceSubmission,
		phone: phonePart(answering, response),
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
	const { t } = useTranslation("grower");
	const format = useFormat();
	const busy = useNavigation().state === "submitting";
	const titleOf = useStepTitle();
	const { groups, steps, closesAt, timeZone, sent, changed } = loaderData;
	const askAddress = (screen: string) =>
		`${href("/answer/:surveyId/:operationId/ask/:screen", { ...params, screen })}?review`;
	return (
		<Page title={t("review.title")} lead={t("review.lead")}>
			{actionData && <Unfinished {...loaderData} {...actionData} addressOf={askAddress} />}
			{sent && !changed && <Notice tone="info">{t("review.alreadySent")}</Notice>}
			{sent && changed && <Notice tone="attention">{t("review.changedNotSent")}</Notice>}
			<AnswerList groups={groups} editHref={askAddress} />
			<Form method="post" className="mt-8" data-answering="">
				<p className="mb-4">{t("review.until", { closes: format.moment(closesAt, timeZone) })}</p>
				<Button busy={busy}>{t(sent ? "review.sendChanges" : "review.send")}</Button>
				<KeptWord />
			</Form>
			<PhonePart
				{...loaderData.phone}
				stage="review"
				labels={Object.fromEntries(steps.map((step) => [step.key, titleOf(step)]))}
			/>
		</Page>
	);
}

type UnfinishedProps = Pick<Route.ComponentProps["loaderData"], "steps"> & {
	outcome: "unfinished" | "to_check";
	stepKeys: string[];
	addressOf: (screen: string) => string;
};

/** What is still missing or odd, with a way to each; answers that are there stay. */
function Unfinished({ steps, outcome, stepKeys, addressOf }: UnfinishedProps) {
	const { t } = useTranslation("grower");
	const titleOf = useStepTitle();
	return (
		<div role="alert">
			<Notice tone="caution" title={t(`review.${outcome}`)}>
				<ul className="list-none space-y-1">
					{steps
						.filter(({ key }) => stepKeys.includes(key))
						.map((step) => (
							<li key={step.key}>
								<Link to={addressOf(step.key)} className="inline-flex min-h-11 items-center">
									{titleOf(step)}
								</Link>
							</li>
						))}
				</ul>
			</Notice>
		</div>
	);
}

import type { ReactNode } from "react";
import { useTranslation } from "react-i18next";
import { Form } from "react-router";
import type { Tried } from "#app/collect/editing/trying.ts";
import type { Answer } from "#app/collect/form.ts";
import { AnswerList } from "#app/components/answer-list.tsx";
import { Button } from "#app/components/button.tsx";
import { ErrorSummary } from "#app/components/error-summary.tsx";
import { Notice } from "#app/components/notice.tsx";
import { useStepTitle } from "#app/components/step-title.ts";
import { TallyStrokes } from "#app/components/tally-strokes.tsx";
import { wordsIn } from "#app/i18n/language.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import { CheckNotice } from "#app/routes/grower/parts/check-notice.tsx";
import { labelOf } from "#app/routes/grower/parts/question-field.tsx";
import { ScreenQuestions } from "#app/routes/grower/parts/screen-questions.tsx";

type AtScreen = Extract<Tried, { at: "screen" }>;
type AtReview = Extract<Tried, { at: "review" }>;
type TriedStepProps = { tried: AtScreen | AtReview; crops: string[] };

/** A screen as a grower meets it, or the review at the end. */
export function TriedStep({ tried, crops }: TriedStepProps) {
	return tried.at === "screen" ? (
		<TriedScreen tried={tried} crops={crops} />
	) : (
		<TriedReview tried={tried} crops={crops} />
	);
}

function TriedScreen({ tried, crops }: { tried: AtScreen; crops: string[] }) {
	const { t, i18n } = useTranslation("forms");
	const format = useFormat();
	const { shown, posted, answers } = tried;
	const { step, number, of, previous } = shown;
	const { questions, values, problems } = posted ?? shown;
	const title = useStepTitle()(step);
	const labels = Object.fromEntries(
		questions.flatMap((question) => [
			[question.key, labelOf(question, i18n.language)],
			[`${question.key}_crate`, t("grower:screen.crateWeight")],
		]),
	);
	return (
		<>
			<h2 className="text-2xl">{title}</h2>
			{step.screen.help && <p className="mt-2 text-quiet">{wordsIn(step.screen.help, i18n.language)}</p>}
			<div className="my-4 flex items-center gap-3 text-base text-quiet">
				<TallyStrokes done={number - 1} all={of} />
				<span>{t("grower:screen.progress", { number: format.number(number), of: format.number(of) })}</span>
			</div>
			<ErrorSummary problems={problems} labels={labels} />
			{/* A screen of its own: boxes of one step must not carry their text into the next. */}
			<Form key={`${step.key} ${JSON.stringify(answers).length}`} method="post" noValidate>
				<Carried crops={crops} answers={answers} step={step.key} />
				{!posted && <CheckNotice checks={shown.checks} busy={false} />}
				<ScreenQuestions
					questions={questions.filter(({ type }) => type !== "photo")}
					planting={step.planting}
					values={values}
					problems={problems}
					shares={step.screen.sumToHundred ?? []}
					filledIn={posted ? undefined : shown.filledIn}
					photoHref={() => ""}
				/>
				{questions
					.filter(({ type }) => type === "photo")
					.map(({ key, text }) => (
						<div key={key} className="mb-6">
							<p className="font-bold">{wordsIn(text, i18n.language)}</p>
							<p className="text-quiet">{t("try.noPhotos")}</p>
						</div>
					))}
				<div className="flex flex-wrap gap-4">
					<Button name="try-go" value="on">
						{t("common:button.continue")}
					</Button>
					{previous && <BackButton to={previous}>{t("common:button.back")}</BackButton>}
				</div>
			</Form>
		</>
	);
}

function TriedReview({ tried, crops }: { tried: AtReview; crops: string[] }) {
	const { t } = useTranslation("forms");
	const { groups, hindrance, answers, previous } = tried;
	const titleOf = useStepTitle();
	const inTheWay = groups.filter(({ stepKey }) => hindrance?.stepKeys.includes(stepKey));
	return (
		<>
			<h2 className="text-2xl">{t("grower:review.title")}</h2>
			{hindrance ? (
				<Notice tone="caution" title={t(`grower:review.${hindrance.outcome}`)}>
					<ul className="list-none">
						{inTheWay.map(({ stepKey, title, planting }) => (
							<li key={stepKey}>{titleOf({ screen: { title }, planting })}</li>
						))}
					</ul>
				</Notice>
			) : (
				<Notice tone="info">{t("try.wouldBeSent")}</Notice>
			)}
			<Form method="post">
				<Carried crops={crops} answers={answers} step="" />
				<AnswerList
					groups={groups}
					level={3}
					changeOf={({ stepKey, name }) => (
						<BackButton to={stepKey} label={t("common:answers.changeOf", { group: name })}>
							{t("common:answers.change")}
						</BackButton>
					)}
				/>
				{previous && (
					<div className="mt-6">
						<BackButton to={previous}>{t("common:button.back")}</BackButton>
					</div>
				)}
			</Form>
		</>
	);
}

/** What goes along from screen to screen. No question's key holds a hyphen, so none of these is one's field. */
function Carried({ crops, answers, step }: { crops: string[]; answers: Answer[]; step: string }) {
	return (
		<>
			{crops.map((crop) => (
				<input key={crop} type="hidden" name="try-crops" value={crop} />
			))}
			<input type="hidden" name="try-answers" value={JSON.stringify(answers)} />
			<input type="hidden" name="try-step" value={step} />
		</>
	);
}

function BackButton({ to, label, children }: { to: string; label?: string; children: ReactNode }) {
	return (
		<Button kind="quiet" name="try-go" value={`back:${to}`} aria-label={label}>
			{children}
		</Button>
	);
}

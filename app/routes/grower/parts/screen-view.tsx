import { useEffect, useRef } from "react";
import { useTranslation } from "react-i18next";
import { Form, href, Link, useNavigation } from "react-router";
import type { Difference } from "#app/collect/answer-lines.ts";
import type { Question } from "#app/collect/form.ts";
import type { StepValues } from "#app/collect/posted.ts";
import type { ShownStep } from "#app/collect/show-step.ts";
import { Button } from "#app/components/button.tsx";
import { ErrorSummary } from "#app/components/error-summary.tsx";
import { Page } from "#app/components/page.tsx";
import { TallyStrokes } from "#app/components/tally-strokes.tsx";
import { wordsIn } from "#app/i18n/language.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import type { Problem } from "#app/lib/parse-form.ts";
import { ChangedElsewhere } from "./changed-elsewhere.tsx";
import { CheckNotice } from "./check-notice.tsx";
import { KeptWord, PhonePart, type PhonePage } from "./phone-part.tsx";
import { photoAddress } from "./photo-address.ts";
import { LateNotice } from "./late-notice.tsx";
import { labelOf } from "./question-field.tsx";
import { ScreenQuestions } from "./screen-questions.tsx";
import { useStepTitle } from "#app/components/step-title.ts";

type AnswerPlace = { surveyId: string; operationId: string };
export type PostedScreen = {
	values: StepValues;
	questions: Question[];
	problems: Problem[];
	/** The version of the step upon which it was typed. */
	seen: number | undefined;
	/** Names of earlier changes of the same page, which the newest answers of the step may be. */
	unsure: string[];
	/** Where another device has changed the step since, in what the two differ. */
	elsewhere: Difference[] | null;
};
type ScreenViewProps = {
	shown: ShownStep & { isLate?: boolean };
	/** What was posted and not kept, with why. */
	posted: PostedScreen | undefined;
	place: AnswerPlace;
	phone: Omit<PhonePage, "stage" | "stepKey">;
};

/** One screen of a survey: its questions, what is to be mended, and the way on and back. */
export function ScreenView({ shown, posted, place, phone }: ScreenViewProps) {
	const { t, i18n } = useTranslation("grower");
	const format = useFormat();
	const busy = useNavigation().state === "submitting";
	const { step, number, of, previous } = shown;
	const { questions, values, problems } = posted ?? shown;
	const elsewhere = posted?.elsewhere;
	const title = useStepTitle()(step);
	const help = step.screen.help && wordsIn(step.screen.help, i18n.language);
	const shares = step.screen.sumToHundred ?? [];
	const labels = Object.fromEntries(
		questions.flatMap((question) => [
			[question.key, labelOf(question, i18n.language)],
			[`${question.key}_crate`, t("screen.crateWeight")],
		]),
	);
	useFocusOnArrival(step.key);
	return (
		<Page title={title} lead={help}>
			<div className="-mt-4 mb-6 flex items-center gap-3 text-base text-quiet">
				<TallyStrokes done={number - 1} all={of} />
				<span>{t("screen.progress", { number: format.number(number), of: format.number(of) })}</span>
			</div>
			{shown.isLate && <LateNotice />}
			<ErrorSummary problems={problems} labels={labels} />
			{/*
			 * A screen of its own: boxes of one step must not carry their text into the next. What the server or the phone holds
			 * is put into them, which the browser's own memory of an earlier view would cover.
			 */}
			<Form
				key={step.key}
				method="post"
				autoComplete="off"
				encType={questions.some(({ type }) => type === "photo") ? "multipart/form-data" : undefined}
				noValidate
				data-answering=""
				data-both={elsewhere ? "" : undefined}
			>
				<input type="hidden" name="_seen" value={posted?.seen ?? shown.version} />
				{posted?.unsure.map((name) => (
					<input key={name} type="hidden" name="_unsure" value={name} />
				))}
				{elsewhere && <ChangedElsewhere lines={elsewhere} />}
				{!posted && <CheckNotice checks={shown.checks} busy={busy} />}
				<ScreenQuestions
					questions={questions}
					planting={step.planting}
					values={values}
					problems={problems}
					shares={shares}
					filledIn={posted ? undefined : shown.filledIn}
					photoHref={photoAddress(place)}
				/>
				<div className="mt-8 flex flex-wrap items-center gap-4">
					<Button busy={busy} data-on="">
						{t(elsewhere ? "elsewhere.mine" : "common:button.continue")}
					</Button>
					<Link to={backAddress(place, previous)} className="inline-flex min-h-11 items-center">
						{t("common:button.back")}
					</Link>
				</div>
				<KeptWord />
			</Form>
			<PhonePart {...phone} stage="ask" stepKey={step.key} labels={labels} />
		</Page>
	);
}

function backAddress(place: AnswerPlace, previous: string | null): string {
	return previous
		? href("/answer/:surveyId/:operationId/ask/:screen", { ...place, screen: previous })
		: href("/answer/:surveyId/:operationId", place);
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

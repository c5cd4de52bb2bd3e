import type { Question } from "#app/collect/form.ts";
import type { StepValues } from "#app/collect/posted.ts";
import type { FilledFrom } from "#app/collect/step-values.ts";
import type { PlantingAsked } from "#app/collect/steps.ts";
import type { Problem } from "#app/lib/parse-form.ts";
import { QuestionField } from "./question-field.tsx";
import { ScreenUnknown } from "./unknown-boxes.tsx";

type ScreenQuestionsProps = {
	questions: Question[];
	planting: PlantingAsked | null;
	values: StepValues;
	problems: Problem[];
	/** The questions that make a hundred together, by key. */
	shares: string[];
	filledIn?: Record<string, FilledFrom>;
	photoHref: (photoId: string) => string;
};

/** The questions of a screen as fields: for growers, and for whoever writes them. */
export function ScreenQuestions(props: ScreenQuestionsProps) {
	const { questions, planting, values, problems, shares, filledIn, photoHref } = props;
	return (
		<>
			{questions.map((question) => (
				<QuestionField
					key={question.key}
					question={question}
					planting={planting}
					values={values}
					mayNotKnow={!shares.includes(question.key)}
					problems={problems}
					filledFrom={filledIn?.[question.key]}
					photoHref={photoHref}
				/>
			))}
			{shares.length > 0 && <ScreenUnknown values={values} />}
		</>
	);
}

import { useTranslation } from "react-i18next";
import type { StepValues } from "#app/collect/posted.ts";
import type { Step } from "#app/collect/steps.ts";
import { useStepTitle } from "#app/components/step-title.ts";
import { wordsIn } from "#app/i18n/language.ts";
import type { Problem } from "#app/lib/parse-form.ts";
import { EntryField } from "./entry-field.tsx";

/** One screen of the grower's form, as a part of the page: planting by planting, question beside question. */
export function EntryStep({ step, values, problems }: { step: Step; values: StepValues; problems: Problem[] }) {
	const { t, i18n } = useTranslation("answered");
	const title = useStepTitle()(step);
	const { screen } = step;
	return (
		<fieldset className="mt-6 min-w-0 border-t border-line pt-3">
			<legend className="float-left mb-3 w-full text-lg font-bold">{title}</legend>
			{screen.condition && <p className="clear-left mb-2 text-sm text-quiet">{t("enter.ifAsked")}</p>}
			{screen.help && (
				<p className="clear-left mb-3 max-w-prose text-sm text-quiet">{wordsIn(screen.help, i18n.language)}</p>
			)}
			<div className="clear-left grid items-end gap-x-6 *:mb-4 sm:grid-cols-2 lg:grid-cols-3">
				{screen.questions.map((question) => (
					<EntryField key={question.key} step={step} question={question} values={values} problems={problems} />
				))}
			</div>
		</fieldset>
	);
}

import { useTranslation } from "react-i18next";
import { Form, useNavigation } from "react-router";
import type { StepValues } from "#app/collect/posted.ts";
import { type EntryCheck, entryName } from "#app/collect/read-entry.ts";
import type { Step } from "#app/collect/steps.ts";
import { Button } from "#app/components/button.tsx";
import { ChoiceField } from "#app/components/choice-field.tsx";
import { ErrorSummary } from "#app/components/error-summary.tsx";
import { languages } from "#app/i18n/language.ts";
import type { Problem } from "#app/lib/parse-form.ts";
import { labelOf } from "../../../grower/parts/question-field.tsx";
import { EntryChecks } from "./entry-checks.tsx";
import { EntryPledge } from "./entry-pledge.tsx";
import { EntryStep } from "./entry-step.tsx";
import { useKeptDraft } from "./use-kept-draft.ts";

type Shown = {
	steps: Step[];
	values: StepValues;
	response: { submittedVersion: number } | null;
	draft: { savedAt: Date } | null;
};
export type PostedEntry = { outcome: string; values: StepValues; problems: Problem[]; checks: EntryCheck[] };

/** The whole form: Tab from box to box, Enter to send in. What is typed is kept meanwhile. */
export function EntryForm({ shown, posted }: { shown: Shown; posted: PostedEntry | undefined }) {
	const { t, i18n } = useTranslation("answered");
	const busy = useNavigation().state === "submitting";
	const { form, kept } = useKeptDraft();
	const { steps, response, draft } = shown;
	const values = posted?.values ?? shown.values;
	const problems = posted?.problems ?? [];
	const meanwhile = posted?.outcome === "answered_meanwhile";
	const labels = Object.fromEntries([
		["pledge", t("enter.pledge")],
		...steps.flatMap(({ key, screen }) =>
			screen.questions.flatMap((question) => [
				[entryName(key, question.key), labelOf(question, i18n.language)],
				[entryName(key, `${question.key}_crate`), t("grower:screen.crateWeight")],
			]),
		),
	]);
	return (
		<>
			<ErrorSummary problems={problems} labels={labels} />
			<Form ref={form} method="post" noValidate>
				{/* The Enter key presses the first button of a form. */}
				<button hidden tabIndex={-1} aria-hidden="true" name="step" value="send" />
				<input type="hidden" name="_seen" value={response?.submittedVersion ?? 0} />
				<p className="mb-4 max-w-prose text-quiet">{t("enter.keys")}</p>
				<div className="flex flex-wrap gap-x-6">
					<ChoiceField
						kind="select"
						name="mode"
						legend={t("enter.mode")}
						defaultValue={values.mode}
						options={(["telephone", "paper"] as const).map((mode) => ({
							value: mode,
							label: t(`desk:response.mode.${mode}`),
						}))}
					/>
					<ChoiceField
						kind="select"
						name="language"
						legend={t("enter.language")}
						defaultValue={values.language}
						options={languages.map((language) => ({ value: language, label: t(`common:language.${language}`) }))}
					/>
				</div>
				{response === null && <EntryPledge isTicked={values.pledge === "on"} problems={problems} />}
				{steps.map((step) => (
					<EntryStep key={step.key} step={step} values={values} problems={problems} />
				))}
				{posted && <EntryChecks checks={posted.checks} steps={steps} confirmed={[values.confirm ?? []].flat()} />}
				<div className="mt-8 flex flex-wrap items-center gap-4">
					<Button busy={busy} name="step" value={meanwhile ? "send_all_the_same" : "send"}>
						{t(meanwhile ? "enter.sendAllTheSame" : "enter.send")}
					</Button>
					<Button kind="secondary" busy={busy} name="step" value="leave">
						{t("enter.leave")}
					</Button>
					{(draft !== null || posted !== undefined || kept) && (
						<Button kind="quiet" busy={busy} name="step" value="drop">
							{t("enter.drop")}
						</Button>
					)}
					<output className="text-sm text-quiet">{kept && t("enter.kept")}</output>
				</div>
			</Form>
		</>
	);
}

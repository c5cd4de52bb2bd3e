import { type ReactNode } from "react";
import { useTranslation } from "react-i18next";
import { Form, href, useLocation } from "react-router";
import { ButtonLink } from "#app/components/button.tsx";
import { Confirm } from "#app/components/confirm.tsx";
import { Section } from "#app/components/section.tsx";
import { languages, wordsIn } from "#app/i18n/language.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import type { Words } from "#app/lib/words.ts";

type BulkSurvey = {
	surveyId: string;
	title: Words;
	season: number;
	toInvite: number;
	toRemind: number;
	reminderWave: number;
};
type BulkActionsProps = {
	count: number;
	mark: string;
	returned: number;
	toLanguage: { en: number; es: number };
	surveys: BulkSurvey[];
};

/** What can be done with the chosen growers, each step saying how many it concerns before it is done. */
export function BulkActions({ count, mark, returned, toLanguage, surveys }: BulkActionsProps) {
	const { t } = useTranslation("growers");
	const format = useFormat();
	const { search } = useLocation();
	const counted = (number: number) => ({ count: number, value: format.number(number) });
	return (
		<>
			{surveys.map((survey) => (
				<SurveyMail key={survey.surveyId} survey={survey} mark={mark} />
			))}
			<Section title={t("bulk.language.title")}>
				<div className="flex flex-wrap gap-3">
					{languages.map((language) => (
						<Step
							key={language}
							mark={mark}
							concerned={toLanguage[language]}
							words={{
								trigger: t(`bulk.language.${language}.button`),
								title: t(`bulk.language.${language}.ask`, counted(toLanguage[language])),
								body: t("bulk.language.body"),
								nobody: t(`bulk.language.${language}.nobody`),
							}}
							step="language"
						>
							<input type="hidden" name="language" value={language} />
						</Step>
					))}
				</div>
			</Section>
			<Section title={t("bulk.tryAnew.title")}>
				<Step
					mark={mark}
					concerned={returned}
					words={{
						trigger: t("bulk.tryAnew.button"),
						title: t("bulk.tryAnew.ask", counted(returned)),
						body: t("bulk.tryAnew.body"),
						nobody: t("bulk.tryAnew.nobody"),
					}}
					step="try_anew"
				/>
			</Section>
			<Section title={t("bulk.export.title")}>
				<p className="mb-3 max-w-prose">{t("bulk.export.body", counted(count))}</p>
				<ButtonLink to={`${href("/desk/growers/export")}${search}`} kind="secondary">
					{t("bulk.export.button")}
				</ButtonLink>
			</Section>
		</>
	);
}

function SurveyMail({ survey, mark }: { survey: BulkSurvey; mark: string }) {
	const { t, i18n } = useTranslation("growers");
	const format = useFormat();
	const { surveyId, toInvite, toRemind, reminderWave } = survey;
	const counted = (number: number) => ({ count: number, value: format.number(number) });
	return (
		<Section title={t("desk:surveys.name", { title: wordsIn(survey.title, i18n.language), season: survey.season })}>
			<div className="flex flex-wrap gap-3">
				<Step
					mark={mark}
					concerned={toInvite}
					words={{
						trigger: t("bulk.invite.button"),
						title: t("bulk.invite.ask", counted(toInvite)),
						body: t("bulk.invite.body"),
						nobody: t("bulk.invite.nobody"),
					}}
					step="invite"
				>
					<input type="hidden" name="surveyId" value={surveyId} />
				</Step>
				<Step
					mark={mark}
					concerned={toRemind}
					words={{
						trigger: t("bulk.remind.button"),
						title: t("bulk.remind.ask", counted(toRemind)),
						body: t("bulk.remind.body"),
						nobody: t("bulk.remind.nobody"),
					}}
					step="remind"
				>
					<input type="hidden" name="surveyId" value={surveyId} />
					<input type="hidden" name="wave" value={reminderWave} />
				</Step>
			</div>
		</Section>
	);
}

type StepProps = {
	step: string;
	mark: string;
	/** How many of the chosen growers it would change. */
	concerned: number;
	words: { trigger: string; title: string; body: string; nobody: string };
	children?: ReactNode;
};

function Step({ step, mark, concerned, words, children }: StepProps) {
	const { t } = useTranslation("growers");
	if (concerned === 0) return <p className="min-w-full text-quiet">{words.nobody}</p>;
	return (
		<Form method="post">
			<Confirm {...words} confirmLabel={t("bulk.confirm")} name="step" value={step}>
				<input type="hidden" name="mark" value={mark} />
				{children}
			</Confirm>
		</Form>
	);
}

import { useTranslation } from "react-i18next";
import { Form, href, Link } from "react-router";
import type { OperationSurvey } from "#app/collect/operation-surveys.server.ts";
import { Confirm } from "#app/components/confirm.tsx";
import { DataTable } from "#app/components/data-table.tsx";
import { EmptyState } from "#app/components/empty-state.tsx";
import { StatusBadge } from "#app/components/status-badge.tsx";
import { wordsIn } from "#app/i18n/language.ts";
import { AnsweredLink } from "./answered-link.tsx";
import { dispositionTones } from "./frame-table.tsx";
import { MailState } from "./mail-state.tsx";

type Asked = { name: string; email: string | null; timeZone: string };
type SurveysOfGrowerProps = { surveys: OperationSurvey[]; operation: Asked };

/** The surveys that asked one operation, each with its mails, and a new link where one can help. */
export function SurveysOfGrower({ surveys, operation }: SurveysOfGrowerProps) {
	const { t, i18n } = useTranslation("desk");
	const nameOf = (survey: OperationSurvey) =>
		t("surveys.name", { title: wordsIn(survey.title, i18n.language), season: survey.season });
	return (
		<DataTable
			caption={t("surveys.title")}
			captionHidden
			rows={surveys}
			rowKey={(survey) => survey.surveyId}
			columns={[
				{
					key: "survey",
					header: t("surveys.survey"),
					cell: (survey) => (
						<Link to={href("/desk/surveys/:surveyId", { surveyId: survey.surveyId })} className="print-plain">
							{nameOf(survey)}
						</Link>
					),
				},
				{
					key: "disposition",
					header: t("responses.disposition"),
					cell: (survey) => (
						<StatusBadge tone={dispositionTones[survey.disposition]}>
							{t(`common:disposition.${survey.disposition}`)}
						</StatusBadge>
					),
				},
				{
					key: "answered",
					header: t("responses.answered"),
					cell: (survey) => <AnsweredLink {...survey} of={nameOf(survey)} timeZone={operation.timeZone} />,
				},
				{
					key: "mails",
					header: t("responses.mails"),
					cell: (survey) => <Mails survey={survey} timeZone={operation.timeZone} />,
				},
				{
					key: "link",
					header: t("grower.link"),
					cell: (survey) => <NewLink survey={survey} surveyName={nameOf(survey)} operation={operation} />,
				},
			]}
			empty={<EmptyState title={t("grower.noSurveyTitle")}>{t("grower.noSurveyBody")}</EmptyState>}
		/>
	);
}

function Mails({ survey, timeZone }: { survey: OperationSurvey; timeZone: string }) {
	const { t } = useTranslation("desk");
	if (survey.mails.length === 0) return <span className="text-quiet">{t("responses.noMail")}</span>;
	return (
		<ul className="min-w-48">
			{survey.mails.map((mail) => (
				<li key={`${mail.kind} ${mail.wave}`}>
					<MailState mail={mail} timeZone={timeZone} />
				</li>
			))}
		</ul>
	);
}

type NewLinkProps = { survey: OperationSurvey; surveyName: string; operation: Asked };

/** A link helps only while the survey is open and unanswered, and goes only where there is an address. */
function NewLink({ survey, surveyName, operation }: NewLinkProps) {
	const { t } = useTranslation("desk");
	if (!survey.isOpen) return <span className="text-quiet">{t("grower.linkClosed")}</span>;
	if (survey.submittedAt) return <span className="text-quiet">{t("grower.linkAnswered")}</span>;
	if (!operation.email) return <span className="text-quiet">{t("grower.linkNoAddress")}</span>;
	return (
		<Form method="post">
			<Confirm
				trigger={t("grower.newLink")}
				title={t("grower.newLinkTitle", { survey: surveyName })}
				body={t("grower.newLinkBody", { email: operation.email })}
				confirmLabel={t("grower.newLinkConfirm")}
			>
				<input type="hidden" name="step" value="link" />
				<input type="hidden" name="surveyId" value={survey.surveyId} />
				<input type="hidden" name="wave" value={survey.linkWave} />
			</Confirm>
		</Form>
	);
}

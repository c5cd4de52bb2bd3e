import { useTranslation } from "react-i18next";
import { href } from "react-router";
import type { Route } from "./+types/orchard";
import { requireOrchard } from "#app/auth/guard.server.ts";
import { listOrchard } from "#app/collect/orchard.server.ts";
import { ButtonLink } from "#app/components/button.tsx";
import { DescriptionList } from "#app/components/description-list.tsx";
import { EmptyState } from "#app/components/empty-state.tsx";
import { Page } from "#app/components/page.tsx";
import { Section } from "#app/components/section.tsx";
import { wordsIn } from "#app/i18n/language.ts";
import { useFormat } from "#app/i18n/use-format.ts";

export async function loader({ context }: Route.LoaderArgs) {
	const grower = requireOrchard(context);
	return { operations: await grower.transaction((trx) => listOrchard(trx, grower.viewer)) };
}

type Operation = Route.ComponentProps["loaderData"]["operations"][number];

export default function Orchard({ loaderData }: Route.ComponentProps) {
	const { t } = useTranslation("grower");
	return (
		<Page title={t("orchard.title")} lead={t("orchard.lead")}>
			{loaderData.operations.map((operation) => (
				<Section key={operation.operationId} title={operation.name}>
					<Surveys operation={operation} />
					<Directory operation={operation} />
				</Section>
			))}
		</Page>
	);
}

function Surveys({ operation }: { operation: Operation }) {
	const { t, i18n } = useTranslation("grower");
	if (operation.surveys.length === 0) {
		return <EmptyState title={t("orchard.noSurveyTitle")}>{t("orchard.noSurveyBody")}</EmptyState>;
	}
	return (
		<ul className="border-t border-rule">
			{operation.surveys.map((survey) => (
				<li key={survey.surveyId} className="border-b border-rule py-4">
					<h3 className="text-lg">
						{t("orchard.survey", { title: wordsIn(survey.title, i18n.language), season: survey.season })}
					</h3>
					<SurveyState survey={survey} />
				</li>
			))}
		</ul>
	);
}

function SurveyState({ survey }: { survey: Operation["surveys"][number] }) {
	const { t } = useTranslation("grower");
	const format = useFormat();
	const { surveyId, operationId, isOpen, begun, receiptCode, submittedAt } = survey;
	const answered = submittedAt && receiptCode;
	return (
		<>
			<p>
				{answered
					? t("orchard.answered", { day: format.dayOf(submittedAt, survey.timeZone), code: receiptCode })
					: t(isOpen ? "orchard.notAnswered" : "orchard.missed")}{" "}
				{isOpen && t("orchard.until", { closes: format.moment(survey.closesAt, survey.timeZone) })}
			</p>
			{isOpen && (
				<div className="mt-3">
					<ButtonLink
						kind={answered ? "secondary" : "primary"}
						to={href("/answer/:surveyId/:operationId", { surveyId, operationId })}
					>
						{t(answered ? "orchard.change" : begun ? "start.goOn" : "orchard.answer")}
					</ButtonLink>
				</div>
			)}
		</>
	);
}

/** What the network has written down about the operation, for the grower to see and have mended. */
function Directory({ operation }: { operation: Operation }) {
	const { t } = useTranslation("grower");
	const format = useFormat();
	const { contactName, email, phone, countyName, stateFips, plantings } = operation;
	return (
		<Section title={t("orchard.known")} level={3}>
			<DescriptionList
				items={[
					{ term: t("orchard.contact"), detail: contactName || t("orchard.nothing") },
					{ term: t("orchard.email"), detail: email ?? t("orchard.nothing") },
					{ term: t("orchard.phone"), detail: phone ?? t("orchard.nothing") },
					{
						term: t("link.county"),
						detail: t("orchard.place", { county: countyName, state: t(`common:state.${stateFips}`) }),
					},
					...plantings.map((planting) => ({
						term: [t(`common:crop.${planting.cropKey}`), planting.cultivar].filter(Boolean).join(", "),
						detail: format.quantity(planting.bearingTrees, "trees"),
					})),
				]}
			/>
			<p className="mt-3 text-base text-quiet">{t("orchard.mend")}</p>
		</Section>
	);
}

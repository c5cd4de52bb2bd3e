import { useTranslation } from "react-i18next";
import { href, Link } from "react-router";
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
import { usePlantingName } from "./parts/planting-name.ts";

export async function loader({ context }: Route.LoaderArgs) {
	const grower = requireOrchard(context);
	return { operations: await grower.transaction((trx) => listOrchard(trx, grower.viewer)) };
}

type Operation = Route.ComponentProps["loaderData"]["operations"][number];

export default function Orchard({ loaderData }: Route.ComponentProps) {
	const { t } = useTranslation("orchard");
	return (
		<Page title={t("home.title")} lead={t("home.lead")}>
			{loaderData.operations.map((operation) => (
				<Section key={operation.operationId} title={operation.name}>
					<Surveys operation={operation} />
					<Directory operation={operation} />
				</Section>
			))}
			<Section title={t("home.take")}>
				<p className="mb-3">{t("home.takeLead")}</p>
				<ul>
					{(["json", "csv"] as const).map((kind) => (
						<li key={kind}>
							<a
								href={href("/orchard/:file", { file: `my-data.${kind}` })}
								download
								className="inline-flex min-h-11 items-center"
							>
								{t(`home.takeAs.${kind}`)}
							</a>
						</li>
					))}
				</ul>
			</Section>
		</Page>
	);
}

function Surveys({ operation }: { operation: Operation }) {
	const { t, i18n } = useTranslation("orchard");
	if (operation.surveys.length === 0) {
		return <EmptyState title={t("home.noSurveyTitle")}>{t("home.noSurveyBody")}</EmptyState>;
	}
	return (
		<ul className="border-t border-rule">
			{operation.surveys.map((survey) => (
				<li key={survey.surveyId} className="border-b border-rule py-4">
					<h3 className="text-lg">
						{t("home.survey", { title: wordsIn(survey.title, i18n.language), season: survey.season })}
					</h3>
					<SurveyState survey={survey} />
				</li>
			))}
		</ul>
	);
}

function SurveyState({ survey }: { survey: Operation["surveys"][number] }) {
	const { t, i18n } = useTranslation("orchard");
	const format = useFormat();
	const { surveyId, operationId, isOpen, begun, everSent, submittedAt, withdrawnAt } = survey;
	const name = t("home.survey", { title: wordsIn(survey.title, i18n.language), season: survey.season });
	return (
		<>
			<p>
				<HowItStands survey={survey} />{" "}
				{isOpen && t("home.until", { closes: format.moment(survey.closesAt, survey.timeZone) })}
			</p>
			<div className="mt-3 flex flex-wrap items-center gap-x-6 gap-y-3">
				{isOpen && (
					<ButtonLink
						kind={submittedAt ? "secondary" : "primary"}
						to={href("/answer/:surveyId/:operationId", { surveyId, operationId })}
						reloadDocument
					>
						{t(submittedAt ? "home.change" : withdrawnAt ? "home.again" : begun ? "grower:start.goOn" : "home.answer")}
					</ButtonLink>
				)}
				{everSent && (
					<Link
						to={href("/orchard/:operationId/answers/:surveyId", { surveyId, operationId })}
						aria-label={t("home.seeOf", { survey: name })}
						className="inline-flex min-h-11 items-center"
					>
						{t("home.see")}
					</Link>
				)}
				{submittedAt && !isOpen && (
					<Link
						to={href("/orchard/compare/:surveyId", { surveyId })}
						aria-label={t("home.compareOf", { survey: name })}
						className="inline-flex min-h-11 items-center"
					>
						{t("home.compare")}
					</Link>
				)}
			</div>
		</>
	);
}

function HowItStands({ survey }: { survey: Operation["surveys"][number] }) {
	const { t } = useTranslation("orchard");
	const format = useFormat();
	const { isOpen, receiptCode, submittedAt, lateAt, withdrawnAt, timeZone } = survey;
	if (submittedAt && receiptCode)
		return t("home.answered", { day: format.dayOf(submittedAt, timeZone), code: receiptCode });
	if (lateAt && receiptCode) return t("home.late", { day: format.dayOf(lateAt, timeZone), code: receiptCode });
	if (withdrawnAt) return t("home.withdrawn", { day: format.dayOf(withdrawnAt, timeZone) });
	return t(isOpen ? "home.notAnswered" : "home.missed");
}

/** What the network has written down about the operation, and where the grower mends it. */
function Directory({ operation }: { operation: Operation }) {
	const { t } = useTranslation("orchard");
	const format = useFormat();
	const nameOf = usePlantingName();
	const { operationId, name, contactName, email, phone, countyName, stateFips, plantings } = operation;
	return (
		<Section title={t("home.known")} level={3}>
			<DescriptionList
				items={[
					{ term: t("home.contact"), detail: contactName || t("home.nothing") },
					{ term: t("home.email"), detail: email ?? t("home.nothing") },
					{ term: t("home.phone"), detail: phone ?? t("home.nothing") },
					{
						term: t("grower:link.county"),
						detail: t("home.place", { county: countyName, state: t(`common:state.${stateFips}`) }),
					},
					{
						term: t("home.plantings"),
						detail:
							plantings.length === 0
								? t("home.nothing")
								: plantings.map((planting) => (
										<span key={planting.plantingId} className="block">
											{t("home.planting", {
												planting: nameOf(planting),
												trees: format.quantity(planting.bearingTrees, "trees"),
											})}
										</span>
									)),
					},
				]}
			/>
			<ul className="no-print mt-3">
				{(["plantings", "place", "settings", "leave"] as const).map((page) => (
					<li key={page}>
						<Link
							to={href(`/orchard/:operationId/${page}`, { operationId })}
							aria-label={t("home.toOf", { page: t(`home.to.${page}`), operation: name })}
							className="inline-flex min-h-11 items-center"
						>
							{t(`home.to.${page}`)}
						</Link>
					</li>
				))}
			</ul>
		</Section>
	);
}

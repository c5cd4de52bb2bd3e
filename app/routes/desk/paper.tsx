import { useTranslation } from "react-i18next";
import { Form, href, Link } from "react-router";
import type { Route } from "./+types/paper";
import { requireAssociate } from "#app/auth/guard.server.ts";
import { paperFilters, paperLanguages, PaperQuery, paperSizes } from "#app/collect/paper-forms.schema.ts";
import { listPaperForms } from "#app/collect/paper-forms.server.ts";
import { Button } from "#app/components/button.tsx";
import { ChoiceField } from "#app/components/choice-field.tsx";
import { EmptyState } from "#app/components/empty-state.tsx";
import { KeyPaging } from "#app/components/key-paging.tsx";
import { Page } from "#app/components/page.tsx";
import { useHydrated } from "#app/components/use-hydrated.ts";
import { wordsIn } from "#app/i18n/language.ts";
import { refusal } from "#app/lib/refusal.ts";
import { PaperFormSheet } from "./parts/paper/paper-form.tsx";
import { paperSheets } from "./parts/paper/paper-sheet.server.ts";

export async function loader({ context, params, request }: Route.LoaderArgs) {
	const desk = requireAssociate(context);
	const query = PaperQuery.parse(Object.fromEntries(new URL(request.url).searchParams));
	const papers = await desk.transaction((trx) => listPaperForms(trx, desk.viewer, params, query));
	if (!papers) throw refusal(params.operationId ? "operation_not_found" : "survey_not_found");
	const { survey, total, moreThanTotal, before, after } = papers;
	return {
		query,
		title: survey.title,
		season: survey.season,
		states: survey.stateFips.filter((one) => desk.viewer.stateFips.includes(one)),
		paging: { total, moreThanTotal, before, after },
		sheets: await paperSheets(papers, query),
	};
}

/** Forms to print: of one operation, or of all that have not answered. Only the sheets reach the paper. */
export default function Paper({ loaderData, params }: Route.ComponentProps) {
	const { query, title, season, states, paging, sheets } = loaderData;
	const { t, i18n } = useTranslation("answered");
	const hydrated = useHydrated();
	const { surveyId, operationId } = params;
	return (
		<>
			<div className="no-print">
				<Page title={t("paper.pageTitle", { survey: wordsIn(title, i18n.language), season })} lead={t("paper.lead")}>
					<p className="mb-4">
						<Link to={href("/desk/surveys/:surveyId/calls", { surveyId })}>{t("paper.back")}</Link>
					</p>
					<Filters query={query} states={operationId ? [] : states} isOne={operationId !== undefined} />
					{!operationId && <KeyPaging {...paging} />}
					{sheets.length === 0 && <EmptyState title={t("paper.emptyTitle")}>{t("paper.emptyBody")}</EmptyState>}
					{hydrated && sheets.length > 0 && (
						<p className="mt-4">
							<Button type="button" onClick={() => window.print()}>
								{t("paper.print", { count: sheets.length })}
							</Button>
						</p>
					)}
				</Page>
			</div>
			{sheets.map((sheet) => (
				<PaperFormSheet key={sheet.key} sheet={sheet} size={query.size} />
			))}
		</>
	);
}

function Filters({ query, states, isOne }: { query: PaperQuery; states: string[]; isOne: boolean }) {
	const { t } = useTranslation("answered");
	return (
		<Form method="get" className="mb-5 flex flex-wrap items-end gap-x-4 gap-y-3 *:mb-0 *:max-w-full">
			{!isOne && (
				<ChoiceField
					kind="select"
					name="show"
					legend={t("paper.show")}
					defaultValue={query.show}
					options={paperFilters.map((value) => ({ value, label: t(`paper.filter.${value}`) }))}
				/>
			)}
			{states.length > 1 && (
				<ChoiceField
					kind="select"
					name="state"
					legend={t("common:areaKind.state")}
					defaultValue={query.state}
					options={[
						{ value: "all", label: t("release:estimates.allStates") },
						...states.map((fips) => ({ value: fips, label: t(`common:state.${fips}`) })),
					]}
				/>
			)}
			<ChoiceField
				kind="select"
				name="language"
				legend={t("paper.language")}
				defaultValue={query.language}
				options={paperLanguages.map((value) => ({ value, label: t(`paper.languages.${value}`) }))}
			/>
			<ChoiceField
				kind="select"
				name="size"
				legend={t("paper.size")}
				defaultValue={query.size}
				options={paperSizes.map((value) => ({ value, label: t(`paper.sizes.${value}`) }))}
			/>
			<Button kind="secondary">{t("rates.show")}</Button>
		</Form>
	);
}

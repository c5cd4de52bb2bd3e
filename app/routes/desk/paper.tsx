import { useTranslation } from "react-i18next";
import { href, Link } from "react-router";
import type { Route } from "./+types/paper";
import { requireAssociate } from "#app/auth/guard.server.ts";
import { PaperQuery } from "#app/collect/paper-forms.schema.ts";
import { listPaperAreas, listPaperForms } from "#app/collect/paper-forms.server.ts";
import { Button } from "#app/components/button.tsx";
import { EmptyState } from "#app/components/empty-state.tsx";
import { KeyPaging } from "#app/components/key-paging.tsx";
import { Page } from "#app/components/page.tsx";
import { useHydrated } from "#app/components/use-hydrated.ts";
import { wordsIn } from "#app/i18n/language.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import { refusal } from "#app/lib/refusal.ts";
import { PaperFilters } from "./parts/paper/paper-filters.tsx";
import { PaperFormSheet } from "./parts/paper/paper-form.tsx";
import { paperSheets } from "./parts/paper/paper-sheet.server.ts";

export async function loader({ context, params, request }: Route.LoaderArgs) {
	const desk = requireAssociate(context);
	const query = PaperQuery.parse(Object.fromEntries(new URL(request.url).searchParams));
	const { surveyId, operationId } = params;
	const { papers, areas } = await desk.transaction(async (trx) => ({
		papers: await listPaperForms(trx, desk.viewer, params, query),
		areas: operationId === undefined ? await listPaperAreas(trx, desk.viewer, surveyId) : [],
	}));
	if (!papers) throw refusal(operationId ? "operation_not_found" : "survey_not_found");
	const { survey, total, moreThanTotal, before, after } = papers;
	return {
		query,
		title: survey.title,
		season: survey.season,
		areas,
		paging: { total, moreThanTotal, before, after },
		sheets: await paperSheets(papers, query),
	};
}

/** Forms to print: of one operation, or of all that have not answered. Only the sheets reach the paper. */
export default function Paper({ loaderData, params }: Route.ComponentProps) {
	const { query, title, season, areas, paging, sheets } = loaderData;
	const { t, i18n } = useTranslation("answered");
	const hydrated = useHydrated();
	const { surveyId, operationId } = params;
	const format = useFormat();
	const all = { count: paging.total, value: format.number(paging.total) };
	const pagingWords = {
		total: t(paging.moreThanTotal ? "paper.partsMoreThan" : "paper.parts", all),
		before: t("paper.partBefore"),
		after: t("paper.partAfter"),
	};
	return (
		<>
			<div className="no-print">
				<Page title={t("paper.pageTitle", { survey: wordsIn(title, i18n.language), season })} lead={t("paper.lead")}>
					<p className="mb-4">
						<Link to={href("/desk/surveys/:surveyId/calls", { surveyId })}>{t("paper.back")}</Link>
					</p>
					<PaperFilters query={query} areas={areas} isOne={operationId !== undefined} />
					{!operationId && <KeyPaging {...paging} words={pagingWords} />}
					{sheets.length === 0 && <EmptyState title={t("paper.emptyTitle")}>{t("paper.emptyBody")}</EmptyState>}
					{hydrated && sheets.length > 0 && (
						<p className="mt-4">
							<Button type="button" onClick={() => window.print()}>
								{t("paper.print", { count: sheets.length })}
							</Button>
						</p>
					)}
					{sheets.length > 1 && (
						<p className="mt-4 text-quiet">{t("paper.firstShown", { value: format.number(sheets.length) })}</p>
					)}
				</Page>
			</div>
			{sheets.map((sheet, i) => (
				<PaperFormSheet key={sheet.key} sheet={sheet} size={query.size} onPaperOnly={i > 0} />
			))}
		</>
	);
}

import { useTranslation } from "react-i18next";
import { href, Link } from "react-router";
import type { Route } from "./+types/estimates";
import { requireAssociate } from "#app/auth/guard.server.ts";
import { Notice } from "#app/components/notice.tsx";
import { Paging } from "#app/components/paging.tsx";
import { useFormat } from "#app/i18n/use-format.ts";
import { refusal } from "#app/lib/refusal.ts";
import { listDraftEstimates } from "./parts/estimates/draft-estimates.server.ts";
import { EstimateFilters } from "./parts/estimates/estimate-filters.tsx";
import { EstimateTable } from "./parts/estimates/estimate-table.tsx";
import { EstimatesQuery } from "./parts/estimates/estimates.schema.ts";

export async function loader({ context, params, request }: Route.LoaderArgs) {
	const desk = requireAssociate(context);
	const query = EstimatesQuery.parse(Object.fromEntries(new URL(request.url).searchParams));
	const found = await desk.transaction((trx) => listDraftEstimates(trx, desk.viewer, params.surveyId, query));
	if (!found) throw refusal("survey_not_found");
	return found;
}

/** Draft figures of the viewer's states, made afresh from the answers so far. */
export default function Estimates({ loaderData, params }: Route.ComponentProps) {
	const { statesNotHeld, isClosed, weighting, designKept, page, pageCount, total } = loaderData;
	const { t } = useTranslation("release");
	const format = useFormat();
	const others = statesNotHeld.map((state) => t(`common:state.${state}`));
	return (
		<>
			<Notice tone="attention" title={t("estimates.mark")}>
				<p>{t("estimates.markBody")}</p>
				{others.length > 0 && <p>{t("estimates.othersLeftOut", { states: format.list(others) })}</p>}
			</Notice>
			{isClosed && (
				<p className="mb-4">
					<Link
						to={href("/desk/surveys/:surveyId/estimates/compared", params)}
						className="inline-flex min-h-11 items-center"
					>
						{t("estimates.toCompared")}
					</Link>
				</p>
			)}
			<p className="mb-4 max-w-prose">
				{t("weighting.ofTable", { name: t(`weighting.choice.${weighting}.name`) })}{" "}
				{designKept > 0 && `${t("weighting.keptIn", { count: designKept, value: format.number(designKept) })} `}
				<Link
					to={href("/desk/surveys/:surveyId/estimates/weighting", params)}
					className="inline-flex min-h-11 items-center"
				>
					{t("weighting.toChoice")}
				</Link>
			</p>
			<EstimateFilters {...loaderData} />
			<EstimateTable {...loaderData} surveyId={params.surveyId} />
			{total > 0 && <Paging page={page} pageCount={pageCount} total={total} />}
		</>
	);
}

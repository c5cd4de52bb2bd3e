import { useTranslation } from "react-i18next";
import { Form } from "react-router";
import type { CountQuery } from "#app/collect/desk-lists.schema.ts";
import type { CountyCount } from "#app/collect/response-counts.server.ts";
import { Button } from "#app/components/button.tsx";
import { ChoiceField } from "#app/components/choice-field.tsx";
import { DataTable } from "#app/components/data-table.tsx";
import { Paging } from "#app/components/paging.tsx";
import { Section } from "#app/components/section.tsx";
import { wordsIn } from "#app/i18n/language.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import type { Words } from "#app/lib/words.ts";

type CountyCountsProps = {
	surveys: { surveyId: string; season: number; title: Words }[];
	counts: { surveyId: string; rows: CountyCount[]; total: number; page: number; pageCount: number };
	query: CountQuery;
};

/** Asked and answered by county, of one survey that is out; with several, which one is chosen above the table. */
export function CountyCounts({ surveys, counts, query }: CountyCountsProps) {
	const { t, i18n } = useTranslation("desk");
	const format = useFormat();
	return (
		<Section title={t("overview.byCounty")} id="counties">
			{surveys.length > 1 && (
				<Form method="get" className="mb-5 flex flex-wrap items-end gap-4 *:mb-0">
					<ChoiceField
						kind="select"
						name="survey"
						legend={t("surveys.survey")}
						defaultValue={counts.surveyId}
						options={surveys.map(({ surveyId, season, title }) => ({
							value: surveyId,
							label: t("surveys.name", { title: wordsIn(title, i18n.language), season }),
						}))}
					/>
					<Button kind="secondary">{t("overview.show")}</Button>
				</Form>
			)}
			<DataTable
				caption={t("overview.byCounty")}
				captionHidden
				rows={counts.rows}
				rowKey={(row) => row.countyFips}
				sort={{ key: query.sort, direction: query.direction }}
				columns={[
					{ key: "county", header: t("common:areaKind.county"), sortable: true, cell: (row) => row.countyName },
					{
						key: "state",
						header: t("common:areaKind.state"),
						sortable: true,
						cell: (row) => t(`common:state.${row.stateFips}`),
					},
					{
						key: "asked",
						header: t("overview.asked"),
						numeric: true,
						sortable: true,
						cell: (row) => format.number(row.asked),
					},
					{
						key: "answered",
						header: t("surveys.answered"),
						numeric: true,
						sortable: true,
						cell: (row) => format.number(row.answered),
					},
					{
						key: "share",
						header: t("overview.share"),
						numeric: true,
						sortable: true,
						cell: (row) => format.quantity(row.share, "percent"),
					},
				]}
			/>
			<Paging page={counts.page} pageCount={counts.pageCount} total={counts.total} />
		</Section>
	);
}

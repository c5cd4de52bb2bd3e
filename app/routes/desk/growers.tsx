import { useTranslation } from "react-i18next";
import { href, Link } from "react-router";
import type { Route } from "./+types/growers";
import { requireAssociate } from "#app/auth/guard.server.ts";
import { DataTable } from "#app/components/data-table.tsx";
import { EmptyState } from "#app/components/empty-state.tsx";
import { Page } from "#app/components/page.tsx";
import { Paging } from "#app/components/paging.tsx";
import { SearchBar } from "#app/components/search-bar.tsx";
import { OperationQuery } from "#app/directory/operation.schema.ts";
import { listOperations } from "#app/directory/operations.server.ts";
import { useFormat } from "#app/i18n/use-format.ts";

export async function loader({ context, request }: Route.LoaderArgs) {
	const desk = requireAssociate(context);
	const query = OperationQuery.parse(Object.fromEntries(new URL(request.url).searchParams));
	return { ...(await desk.transaction((trx) => listOperations(trx, desk.viewer, query))), query };
}

export default function Growers({ loaderData }: Route.ComponentProps) {
	const { rows, total, page, pageCount, query } = loaderData;
	const { t } = useTranslation("desk");
	const format = useFormat();
	return (
		<Page title={t("growers.title")} lead={t("growers.lead")}>
			<SearchBar label={t("growers.search")} defaultValue={query.q} />
			<DataTable
				caption={t("growers.title")}
				captionHidden
				rows={rows}
				rowKey={(row) => row.operationId}
				sort={{ key: query.sort, direction: query.direction }}
				columns={[
					{
						key: "name",
						header: t("growers.name"),
						sortable: true,
						cell: ({ operationId, name }) => (
							<Link to={href("/desk/growers/:operationId", { operationId })} className="print-plain">
								{name}
							</Link>
						),
					},
					{ key: "owner", header: t("growers.contact"), sortable: true, cell: (row) => row.contactName },
					{
						key: "county",
						header: t("common:areaKind.county"),
						sortable: true,
						cell: (row) => t("growers.county", { county: row.countyName, state: row.statePostal }),
					},
					{
						key: "crops",
						header: t("survey.crops"),
						cell: (row) => format.list(row.cropKeys.map((crop) => t(`common:crop.${crop}`))),
					},
					{
						key: "trees",
						header: t("growers.trees"),
						numeric: true,
						sortable: true,
						cell: (row) => format.number(row.bearingTrees),
					},
				]}
				empty={<EmptyState title={t("growers.emptyTitle")}>{t("growers.emptyBody")}</EmptyState>}
			/>
			<Paging page={page} pageCount={pageCount} total={total} />
		</Page>
	);
}

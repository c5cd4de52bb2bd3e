import { useTranslation } from "react-i18next";
import { data, useNavigation } from "react-router";
import type { Route } from "./+types/tables";
import { requirePerson } from "#app/auth/guard.server.ts";
import { visitorContext } from "#app/auth/visitor.server.ts";
import { EmptyState } from "#app/components/empty-state.tsx";
import { ErrorSummary } from "#app/components/error-summary.tsx";
import { Page } from "#app/components/page.tsx";
import { env } from "#app/lib/env.server.ts";
import { pictureOf } from "#app/publish/picture.server.ts";
import { readCatalogue } from "#app/publish/tables/catalogue.server.ts";
import { listTableRecords } from "#app/publish/tables/records.server.ts";
import { canBeTold, readSelection, statesOf, wantedReleases, wantsRevisions } from "#app/publish/tables/selection.ts";
import { tellChoice } from "#app/publish/tables/tell-table.ts";
import { tableInBrowser } from "./parts/tables/in-browser.ts";
import { useTableLabels } from "./parts/tables/table-labels.ts";
import { TableForm } from "./parts/tables/table-form.tsx";
import { TableResult } from "./parts/tables/table-result.tsx";

export async function loader({ context, request }: Route.LoaderArgs) {
	requirePerson(context);
	const { searchParams } = new URL(request.url);
	const catalogue = await readCatalogue(wantedReleases(searchParams), wantsRevisions(searchParams));
	const read = readSelection(searchParams, catalogue);
	const records = canBeTold(read) ? await listTableRecords(catalogue, read.selection) : null;
	const told = tellChoice(catalogue, read, records);
	const page = {
		...told,
		catalogue,
		picture: told.table?.map ? pictureOf(statesOf(catalogue)) : null,
		approved: context.get(visitorContext).grants.researcher,
		site: env().BASE_URL,
		state: "served" as "served" | "fetched" | "failed",
	};
	return data(page, { status: told.problems.length > 0 ? 400 : 200 });
}

/** With scripts a choice is told from the data API, which anybody can ask, and the page stays. */
export function clientLoader({ request, serverLoader }: Route.ClientLoaderArgs) {
	return tableInBrowser(request, serverLoader);
}
clientLoader.hydrate = true as const;

export default function Tables({ loaderData }: Route.ComponentProps) {
	const { t } = useTranslation("dataroom");
	const labels = useTableLabels();
	const navigation = useNavigation();
	const busy = navigation.state === "loading" && navigation.location.pathname.endsWith("/tables");
	const { catalogue, problems, state } = loaderData;
	if (catalogue.releases.every(({ withdrawn }) => withdrawn)) {
		return (
			<Page title={t("tables.title")} lead={t("tables.lead")}>
				<EmptyState title={t("home.emptyTitle")}>{t("tables.emptyBody")}</EmptyState>
			</Page>
		);
	}
	return (
		<Page title={t("tables.title")} lead={t("tables.lead")}>
			{/* While somebody chooses, a problem is said beside its field and takes no focus away. */}
			{state === "served" && <ErrorSummary problems={problems} labels={labels} />}
			<TableForm {...loaderData} busy={busy} />
			<TableResult {...loaderData} busy={busy} />
		</Page>
	);
}

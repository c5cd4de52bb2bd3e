import { useTranslation } from "react-i18next";
import { href } from "react-router";
import type { Route } from "./+types/reports";
import { requireCoordinator } from "#app/auth/guard.server.ts";
import { Page } from "#app/components/page.tsx";
import { listReports } from "#app/publish/drafting/reports.server.ts";
import { ReportTable, toRow } from "#app/routes/desk/parts/report-table.tsx";

export async function loader({ context }: Route.LoaderArgs) {
	const network = requireCoordinator(context);
	const reports = await network.transaction((trx) => listReports(trx, network.viewer));
	return { reports: reports.map(toRow) };
}

export default function NetworkReports({ loaderData: { reports } }: Route.ComponentProps) {
	const { t } = useTranslation("public");
	return (
		<Page title={t("report_review.listTitle")} lead={t("report_review.listLead")}>
			<ReportTable
				rows={reports}
				linkTo={(reportId) => href("/network/reports/:reportId", { reportId })}
				empty={t("report_review.none")}
			/>
		</Page>
	);
}

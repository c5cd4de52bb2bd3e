import { useTranslation } from "react-i18next";
import { Form, href, Link, redirect } from "react-router";
import { z } from "zod";
import type { Route } from "./+types/report-versions";
import { requireAssociate } from "#app/auth/guard.server.ts";
import { sessionContext } from "#app/auth/session.server.ts";
import { Button } from "#app/components/button.tsx";
import { type Column, DataTable } from "#app/components/data-table.tsx";
import { Page } from "#app/components/page.tsx";
import { Section } from "#app/components/section.tsx";
import { wordsIn } from "#app/i18n/language.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import { refusal } from "#app/lib/refusal.ts";
import { listEdits } from "#app/publish/drafting/report-edits.server.ts";
import { findReport, saveReport } from "#app/publish/drafting/reports.server.ts";
import { findReleaseById } from "#app/publish/releases.server.ts";
import { resolveReport } from "#app/publish/resolved-report.server.ts";
import { ReportPreview } from "./parts/report-preview.tsx";

const Edit = z.coerce.number().int().positive().catch(0);

export async function loader({ context, params, request }: Route.LoaderArgs) {
	const desk = requireAssociate(context);
	const found = await desk.transaction(async (trx) => {
		const report = await findReport(trx, desk.viewer, params.reportId);
		return report && { report, edits: await listEdits(trx, report.reportId) };
	});
	const release = found && (await findReleaseById(found.report.releaseId));
	if (!found || !release) throw refusal("report_not_found");
	const { report, edits } = found;
	const edit = Edit.parse(new URL(request.url).searchParams.get("edit"));
	const chosen = edits.find((one) => one.edit === edit);
	return {
		report: { reportId: report.reportId, title: report.content.title, state: report.state, edit: report.edit },
		edits: edits.map(({ content: _content, ...told }) => told),
		chosen: chosen ? { edit: chosen.edit, told: await resolveReport(chosen.content, release) } : null,
	};
}

export async function action({ context, params, request }: Route.ActionArgs) {
	const desk = requireAssociate(context);
	const edit = Edit.parse((await request.formData()).get("edit"));
	const saved = await desk.transaction(async (trx) => {
		const report = await findReport(trx, desk.viewer, params.reportId);
		const wanted = report && (await listEdits(trx, report.reportId)).find((one) => one.edit === edit);
		if (!report || !wanted) return undefined;
		return saveReport(trx, desk.viewer, report.reportId, report.edit, wanted.content, report.correction);
	});
	if (!saved) throw refusal("report_not_found");
	const key = saved.outcome === "saved" ? "report:edits.restored" : "public:report_editor.notDraft";
	context.get(sessionContext).flash("toast", { key });
	return redirect(href("/desk/reports/:reportId", { reportId: params.reportId }), 303);
}

export default function ReportVersions({ loaderData: { report, edits, chosen } }: Route.ComponentProps) {
	const { t, i18n } = useTranslation("report");
	const title = wordsIn(report.title, i18n.language) || t("public:report_editor.untitled");
	return (
		<Page
			title={t("edits.title", { title })}
			lead={t("edits.lead")}
			actions={<Link to={href("/desk/reports/:reportId", { reportId: report.reportId })}>{t("edits.back")}</Link>}
		>
			<EditTable edits={edits} />
			{chosen && (
				<Section title={t("edits.one", { edit: chosen.edit })}>
					{report.state === "draft" && chosen.edit !== report.edit && (
						<Form method="post" className="mb-6">
							<input type="hidden" name="edit" value={chosen.edit} />
							<Button kind="secondary">{t("edits.restore")}</Button>
						</Form>
					)}
					<ReportPreview told={chosen.told} />
				</Section>
			)}
		</Page>
	);
}

type EditRow = Route.ComponentProps["loaderData"]["edits"][number];

function EditTable({ edits }: { edits: EditRow[] }) {
	const { t } = useTranslation("report");
	const format = useFormat();
	const columns: Column<EditRow>[] = [
		{
			key: "edit",
			header: t("edits.edit"),
			cell: ({ edit }) => <Link to={`?edit=${edit}`}>{t("edits.one", { edit })}</Link>,
		},
		{ key: "when", header: t("edits.when"), cell: ({ savedAt }) => format.moment(savedAt) },
		{ key: "who", header: t("edits.who"), cell: ({ savedByName }) => savedByName },
	];
	return (
		<DataTable
			caption={t("edits.lead")}
			captionHidden
			columns={columns}
			rows={edits}
			rowKey={({ edit }) => `${edit}`}
			empty={<p className="text-quiet">{t("edits.none")}</p>}
		/>
	);
}

import { useTranslation } from "react-i18next";
import { data, Form, href, Link, redirect } from "react-router";
import type { Route } from "./+types/growers-import";
import { requireAssociate } from "#app/auth/guard.server.ts";
import { Button } from "#app/components/button.tsx";
import { DataTable } from "#app/components/data-table.tsx";
import { EmptyState } from "#app/components/empty-state.tsx";
import { ErrorSummary } from "#app/components/error-summary.tsx";
import { Page } from "#app/components/page.tsx";
import { Section } from "#app/components/section.tsx";
import { createImport, listImports } from "#app/directory/import/imports.server.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import { queueJob } from "#app/jobs/queue.server.ts";
import { FileBox } from "./parts/imports/file-box.tsx";
import { ImportStatusBadge } from "./parts/imports/import-status.tsx";
import { readUploadedFile } from "./parts/imports/uploaded-file.server.ts";

export async function loader({ context }: Route.LoaderArgs) {
	const desk = requireAssociate(context);
	return { imports: await desk.transaction((trx) => listImports(trx, desk.viewer)), states: desk.viewer.stateFips };
}

/** Takes a file in; queued work reads it, and nothing of it is in the list before that is said. */
export async function action({ context, request }: Route.ActionArgs) {
	const desk = requireAssociate(context);
	const upload = await readUploadedFile(request);
	if ("problems" in upload) return data({ problems: upload.problems }, { status: 400 });
	const importId = await desk.transaction(async (trx) => {
		const id = await createImport(trx, desk.viewer, upload);
		await queueJob(trx, "import_growers", { importId: id, step: "read" }, { maxAttempts: 2 });
		return id;
	});
	return redirect(href("/desk/growers/import/:importId", { importId }), 303);
}

export default function GrowersImport({ loaderData, actionData }: Route.ComponentProps) {
	const { imports, states } = loaderData;
	const { t } = useTranslation("growers");
	const format = useFormat();
	const problem = actionData?.problems.find(({ field }) => field === "file");
	return (
		<Page title={t("import.title")} lead={t("import.lead")}>
			<p className="no-print mb-4">
				<Link to={href("/desk/growers")}>{t("desk:grower.back")}</Link>
			</p>
			<ErrorSummary problems={actionData?.problems} labels={{ file: t("import.file") }} />
			<Form method="post" encType="multipart/form-data" noValidate>
				<FileBox problem={problem} />
				<Button>{t("import.read")}</Button>
			</Form>
			<Section title={t("import.needs.title")}>
				<ul className="max-w-prose list-disc space-y-1 pl-6">
					<li>{t("import.needs.columns")}</li>
					<li>{t("import.needs.plantings")}</li>
					<li>
						{t("import.needs.states", { states: format.list(states.map((state) => t(`common:state.${state}`))) })}
					</li>
					<li>{t("import.needs.nothingYet")}</li>
				</ul>
			</Section>
			<Section title={t("import.log.title")}>
				<DataTable
					caption={t("import.log.title")}
					captionHidden
					rows={imports}
					rowKey={(row) => row.importId}
					columns={[
						{
							key: "file",
							header: t("import.log.file"),
							cell: ({ importId, fileName }) => (
								<Link to={href("/desk/growers/import/:importId", { importId })} className="wrap-anywhere">
									{fileName}
								</Link>
							),
						},
						{ key: "who", header: t("import.log.who"), cell: (row) => row.personName },
						{
							key: "when",
							header: t("import.log.when"),
							cell: (row) => format.moment(row.importedAt ?? row.createdAt),
						},
						{
							key: "rows",
							header: t("import.count.rows"),
							numeric: true,
							cell: (row) => (row.counts ? format.number(row.counts.rows) : ""),
						},
						{
							key: "operations",
							header: t("import.count.operations"),
							numeric: true,
							cell: (row) => (row.counts ? format.number(row.counts.operations) : ""),
						},
						{
							key: "bad",
							header: t("import.count.bad"),
							numeric: true,
							cell: (row) => (row.counts ? format.number(row.counts.bad) : ""),
						},
						{ key: "status", header: t("import.log.status"), cell: (row) => <ImportStatusBadge file={row} /> },
					]}
					empty={<EmptyState title={t("import.log.emptyTitle")}>{t("import.log.emptyBody")}</EmptyState>}
				/>
			</Section>
		</Page>
	);
}

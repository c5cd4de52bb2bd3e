import { useTranslation } from "react-i18next";
import { data, Form, href, Link, redirect } from "react-router";
import type { Route } from "./+types/growers-import-file";
import { requireAssociate } from "#app/auth/guard.server.ts";
import { sessionContext } from "#app/auth/session.server.ts";
import { Button } from "#app/components/button.tsx";
import { Notice } from "#app/components/notice.tsx";
import { Page } from "#app/components/page.tsx";
import { listImportRows, RowQuery } from "#app/directory/import/import-rows.server.ts";
import { findImport } from "#app/directory/import/imports.server.ts";
import { refusal } from "#app/lib/refusal.ts";
import { takeImportStep } from "./parts/imports/import-steps.server.ts";
import { ColumnsForm } from "./parts/imports/columns-form.tsx";
import { ImportFailureNotice } from "./parts/imports/import-failure.tsx";
import { ImportPreview } from "./parts/imports/import-preview.tsx";
import { ImportProgress } from "./parts/imports/import-status.tsx";
import { sampleColumns } from "./parts/imports/sample-columns.server.ts";

export async function loader({ context, params, request }: Route.LoaderArgs) {
	const desk = requireAssociate(context);
	const search = new URL(request.url).searchParams;
	const query = RowQuery.parse(Object.fromEntries(search));
	const found = await desk.transaction(async (trx) => {
		const file = await findImport(trx, desk.viewer, params.importId);
		if (!file) return undefined;
		const { importId, status, counts } = file;
		const atColumns = status === "columns" || (status === "checked" && search.has("columns"));
		const show = query.show ?? (counts && counts.bad > 0 ? "bad" : counts && counts.matched > 0 ? "matched" : "new");
		return {
			file,
			show,
			columns: atColumns ? await sampleColumns(trx, file) : null,
			rows: status === "checked" && !atColumns ? await listImportRows(trx, importId, show, query.page) : null,
		};
	});
	if (!found) throw refusal("import_not_found");
	return found;
}

/** Takes the file a step further, or gives it up. */
export async function action({ context, params, request }: Route.ActionArgs) {
	const desk = requireAssociate(context);
	const form = await request.formData();
	const outcome = await desk.transaction((trx) => takeImportStep(trx, desk.viewer, params.importId, form));
	if (outcome === "not_found") throw refusal("import_not_found");
	if (outcome === "not_understood") throw refusal("form_not_understood");
	if (typeof outcome === "object") return data(outcome, { status: 400 });
	if (outcome === "dropped") {
		context.get(sessionContext).flash("toast", { key: "growers:import.dropped" });
		return redirect(href("/desk/growers/import"), 303);
	}
	if (outcome === "kept") context.get(sessionContext).flash("toast", { key: "growers:import.choicesKept" });
	const { search } = new URL(request.url);
	return redirect(href("/desk/growers/import/:importId", params) + (outcome === "kept" ? search : ""), 303);
}

const working = new Set(["reading", "checking", "importing", "undoing"]);

export default function GrowersImportFile({ loaderData, actionData }: Route.ComponentProps) {
	const { file, columns, rows, show } = loaderData;
	const { status, failure, standsStill } = file;
	const { t } = useTranslation("growers");
	const stopped = standsStill || failure !== null;
	return (
		<Page title={t("import.ofFile", { file: file.fileName })}>
			<p className="no-print mb-4">
				<Link to={href("/desk/growers/import")}>{t("import.back")}</Link>
			</p>
			{failure && <ImportFailureNotice failure={failure} />}
			{working.has(status) && !failure && <ImportProgress {...file} />}
			{working.has(status) && standsStill && !failure && (
				<Notice tone="attention">{t(status === "reading" ? "import.standsStillReading" : "import.standsStill")}</Notice>
			)}
			{standsStill && (status === "checking" || status === "importing" || status === "undoing") && (
				<Form method="post">
					<Button name="step" value={`${status}_again`} kind="secondary">
						{t("import.again")}
					</Button>
				</Form>
			)}
			{columns && (
				<ColumnsForm
					key={status}
					columns={columns}
					choices={file.choices}
					values={actionData?.values}
					problems={actionData?.problems}
				/>
			)}
			{(rows || status === "imported" || status === "undone") && <ImportPreview file={file} rows={rows} show={show} />}
			{(status === "columns" || status === "checked" || (status === "reading" && stopped)) && (
				<Form method="post" className="mt-8">
					<Button name="step" value="drop" kind="quiet">
						{t("import.drop")}
					</Button>
				</Form>
			)}
		</Page>
	);
}

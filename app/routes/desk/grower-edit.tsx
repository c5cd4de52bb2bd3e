import { useTranslation } from "react-i18next";
import { data, Form, href, Link, redirect } from "react-router";
import type { Route } from "./+types/grower-edit";
import { requireAssociate } from "#app/auth/guard.server.ts";
import { sessionContext } from "#app/auth/session.server.ts";
import { Button } from "#app/components/button.tsx";
import { ErrorSummary } from "#app/components/error-summary.tsx";
import { Page } from "#app/components/page.tsx";
import { listAreas } from "#app/directory/areas.server.ts";
import { editOperation } from "#app/directory/edit-operation.server.ts";
import { findOperation } from "#app/directory/operations.server.ts";
import { parseForm } from "#app/lib/parse-form.ts";
import { refusal } from "#app/lib/refusal.ts";
import { OperationFields, useOperationLabels } from "./parts/growers/operation-fields.tsx";
import { OperationForm } from "./parts/growers/operation-form.ts";

export async function loader({ context, params }: Route.LoaderArgs) {
	const desk = requireAssociate(context);
	const found = await desk.transaction(async (trx) => {
		const operation = await findOperation(trx, desk.viewer, params.operationId);
		if (operation?.status !== "active") return undefined;
		const areas = await listAreas(trx, desk.viewer.stateFips);
		return { operation, counties: areas.filter(({ kind }) => kind === "county") };
	});
	if (!found) throw refusal("operation_not_found");
	return found;
}

export async function action({ context, params, request }: Route.ActionArgs) {
	const desk = requireAssociate(context);
	const form = parseForm(OperationForm, await request.formData());
	if (!form.ok) return data({ values: form.values, problems: form.problems }, { status: 400 });
	const outcome = await desk.transaction((trx) => editOperation(trx, desk.viewer, params.operationId, form.value));
	if (outcome === "not_found") throw refusal("operation_not_found");
	if (outcome === "unknown_county")
		return data({ values: form.values, problems: [{ field: "countyFips", code: "unknown_county" }] }, { status: 400 });
	context.get(sessionContext).flash("toast", { key: "growers:edit.saved" });
	return redirect(href("/desk/growers/:operationId", params), 303);
}

export default function GrowerEdit({ loaderData, actionData, params }: Route.ComponentProps) {
	const { operation, counties } = loaderData;
	const { t } = useTranslation("growers");
	const { values, problems } = actionData ?? {};
	return (
		<Page title={t("edit.title", { name: operation.name })}>
			<p className="no-print mb-4">
				<Link to={href("/desk/growers/:operationId", params)}>{t("edit.back")}</Link>
			</p>
			<ErrorSummary problems={problems} labels={useOperationLabels()} />
			<Form method="post" noValidate>
				<OperationFields
					counties={counties}
					defaults={operation}
					values={values}
					problems={problems}
					countyHelp={t("edit.countyHelp")}
				/>
				<Button>{t("edit.save")}</Button>
			</Form>
		</Page>
	);
}

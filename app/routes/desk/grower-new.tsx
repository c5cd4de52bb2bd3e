import { useTranslation } from "react-i18next";
import { data, Form, href, Link, redirect } from "react-router";
import type { Route } from "./+types/grower-new";
import { requireAssociate } from "#app/auth/guard.server.ts";
import { sessionContext } from "#app/auth/session.server.ts";
import { Button } from "#app/components/button.tsx";
import { ErrorSummary } from "#app/components/error-summary.tsx";
import { Page } from "#app/components/page.tsx";
import { TextField } from "#app/components/text-field.tsx";
import { listAreas } from "#app/directory/areas.server.ts";
import { createOperation, findLookAlikes } from "#app/directory/new-operation.server.ts";
import { getLanguage } from "#app/i18n/middleware.server.ts";
import { lookAgain } from "#app/lib/look-again.ts";
import { type FormValues, parseForm, type Problem } from "#app/lib/parse-form.ts";
import { LookAlikes } from "./parts/growers/look-alikes.tsx";
import { NewPlantings, useNewPlantingLabels } from "./parts/growers/new-plantings.tsx";
import { OperationFields, useOperationLabels } from "./parts/growers/operation-fields.tsx";
import { mostPlantings, newOperationForm } from "./parts/growers/operation-form.ts";

export async function loader({ context }: Route.LoaderArgs) {
	const desk = requireAssociate(context);
	const areas = await desk.transaction((trx) => listAreas(trx, desk.viewer.stateFips));
	return { counties: areas.filter(({ kind }) => kind === "county") };
}

type LookAlikesFound = Awaited<ReturnType<typeof findLookAlikes>>;
type Sent = { values: FormValues; problems: Problem[]; rows: number; alike: LookAlikesFound | null };

/** Writes down a grower. Who looks like one that is known is shown first, and saved only when that was seen. */
export async function action({ context, request }: Route.ActionArgs) {
	const desk = requireAssociate(context);
	const sent = await request.formData();
	const form = parseForm(newOperationForm(getLanguage(context), new Date().getUTCFullYear()), sent);
	const { values } = form;
	const rows = rowsOf(values);
	const again = (more: Partial<Sent>, status: number) =>
		data<Sent>({ values, problems: [], rows, alike: null, ...more }, { status });
	if (sent.get("step") === "more") return again({ rows: Math.min(rows + 1, mostPlantings) }, 200);
	if (!form.ok) return again({ problems: form.problems }, 400);

	const { confirmed, ...input } = form.value;
	const outcome = await desk.transaction(async (trx) => {
		const alike = await findLookAlikes(trx, desk.viewer, input);
		if (!confirmed && alike.likely.length + alike.owners.length > 0) return { alike };
		return createOperation(trx, desk.viewer, input);
	});
	if (outcome === "unknown_county") return again({ problems: [{ field: "countyFips", code: "unknown_county" }] }, 400);
	if (outcome === "unknown_owner") return again({ problems: [{ field: "ownerId", code: "choice_wrong" }] }, 400);
	if ("alike" in outcome) return again({ alike: outcome.alike }, 409);
	context.get(sessionContext).flash("toast", { key: "growers:new.saved", values: { name: input.name } });
	return redirect(href("/desk/growers/:operationId", { operationId: outcome.operationId }), 303);
}

const rowsOf = ({ plantings }: FormValues) => Math.max(1, Array.isArray(plantings) ? plantings.length : 0);

export const shouldRevalidate = lookAgain;

export default function GrowerNew({ loaderData, actionData }: Route.ComponentProps) {
	const { t } = useTranslation("growers");
	const { values, problems, rows = 1, alike } = actionData ?? {};
	const labels = {
		...useOperationLabels(),
		...useNewPlantingLabels(rows),
		ownerName: t("new.ownerName"),
		email: t("desk:grower.email"),
		ownerId: t("new.owner"),
	};
	const box = (name: "ownerName" | "email") => ({
		name,
		label: labels[name],
		defaultValue: String(values?.[name] ?? ""),
		problem: problems?.find(({ field }) => field === name),
	});
	return (
		<Page title={t("new.title")} lead={t("new.lead")}>
			<p className="no-print mb-4">
				<Link to={href("/desk/growers")}>{t("desk:grower.back")}</Link>
			</p>
			<ErrorSummary problems={problems} labels={labels} />
			<Form method="post" noValidate>
				{alike && <LookAlikes {...alike} ownerName={String(values?.ownerName ?? "")} />}
				<OperationFields
					counties={loaderData.counties}
					defaults={{ language: "en", massUnit: "lb" }}
					values={values}
					problems={problems}
				/>
				<TextField {...box("ownerName")} help={t("new.ownerHelp")} size="full" maxLength={200} />
				<TextField {...box("email")} help={t("new.emailHelp")} type="email" maxLength={254} optional />
				<NewPlantings rows={rows} values={values} problems={problems} />
				<div className="flex flex-wrap gap-3">
					<Button name="step" value="save">
						{t("new.save")}
					</Button>
					{rows < mostPlantings && (
						<Button kind="secondary" name="step" value="more">
							{t("new.more")}
						</Button>
					)}
				</div>
			</Form>
		</Page>
	);
}

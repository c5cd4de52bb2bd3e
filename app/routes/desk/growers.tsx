import { useTranslation } from "react-i18next";
import { data, Form, href, redirect } from "react-router";
import { z } from "zod";
import type { Route } from "./+types/growers";
import { requireAssociate } from "#app/auth/guard.server.ts";
import { sessionContext } from "#app/auth/session.server.ts";
import { answeredCondition, listLastAnswers } from "#app/collect/last-answers.server.ts";
import { ButtonLink } from "#app/components/button.tsx";
import { ErrorSummary } from "#app/components/error-summary.tsx";
import { KeyPaging } from "#app/components/key-paging.tsx";
import { Page } from "#app/components/page.tsx";
import { listAreas } from "#app/directory/areas.server.ts";
import { OperationQuery, queryParts } from "#app/directory/operation.schema.ts";
import { listOperations } from "#app/directory/operation-list.server.ts";
import { dropView, listSavedViews, renameView, saveView } from "#app/directory/saved-views.server.ts";
import { placeText } from "#app/lib/page-by-key.ts";
import { parseForm, type Problem } from "#app/lib/parse-form.ts";
import { ChooseGrowers } from "./parts/growers/choose-growers.tsx";
import { GrowerFilters } from "./parts/growers/grower-filters.tsx";
import { GrowerTable } from "./parts/growers/grower-table.tsx";
import { SavedViews, viewLabels } from "./parts/growers/saved-views.tsx";

export async function loader({ context, request }: Route.LoaderArgs) {
	const desk = requireAssociate(context);
	const query = OperationQuery.parse(Object.fromEntries(new URL(request.url).searchParams));
	const { viewer } = desk;
	return desk.transaction(async (trx) => {
		const list = await listOperations(trx, viewer, query, answeredCondition(query.answered));
		const answered = await listLastAnswers(
			trx,
			list.rows.map(({ operationId }) => operationId),
		);
		const areas = await listAreas(trx, viewer.stateFips);
		return {
			...list,
			rows: list.rows.map((row) => ({ ...row, answeredAt: answered.get(row.operationId) ?? null })),
			query,
			parts: queryParts(query),
			views: await listSavedViews(trx, viewer),
			districts: areas.filter(({ kind }) => kind === "district"),
			states: viewer.stateFips,
		};
	});
}

const viewName = z.string({ error: "empty" }).trim().min(1, "empty").max(80, "too_long");
const ViewForm = z.discriminatedUnion("step", [
	z.object({ step: z.literal("save"), name: viewName }),
	z.object({ step: z.literal("rename"), savedViewId: z.guid("choice_wrong"), newName: viewName }),
	z.object({ step: z.literal("drop"), savedViewId: z.guid() }),
]);

/** What is to be mended where a view could not be kept or renamed. */
const refusedViews = {
	too_many: { field: "name", code: "views_too_many" },
	name_taken: { field: "newName", code: "view_name_taken" },
	not_found: { field: "savedViewId", code: "choice_wrong" },
};
const toasts = { save: "growers:views.saved", rename: "growers:views.renamed", drop: "growers:views.dropped" };

/** Keeps the filters of the address as a view, renames a view, or takes it away. */
export async function action({ context, request }: Route.ActionArgs) {
	const desk = requireAssociate(context);
	const form = parseForm(ViewForm, await request.formData());
	if (!form.ok) return data({ values: form.values, problems: form.problems }, { status: 400 });
	const { value: step, values } = form;
	const { search, searchParams } = new URL(request.url);
	const outcome = await desk.transaction(async (trx) => {
		if (step.step === "drop") return dropView(trx, desk.viewer, step.savedViewId);
		if (step.step === "rename") {
			const { savedViewId, newName: name } = step;
			return renameView(trx, desk.viewer, { savedViewId, name });
		}
		const query = OperationQuery.parse(Object.fromEntries(searchParams));
		return saveView(trx, desk.viewer, { name: step.name, query });
	});
	if (outcome && outcome in refusedViews) {
		const problem: Problem = refusedViews[outcome as keyof typeof refusedViews];
		return data({ values, problems: [problem] }, { status: 400 });
	}
	context.get(sessionContext).flash("toast", { key: toasts[step.step] });
	return redirect(`${href("/desk/growers")}${search}`, 303);
}

export default function Growers({ loaderData, actionData }: Route.ComponentProps) {
	const { rows, total, moreThanTotal, before, after, query, views, parts } = loaderData;
	const { t } = useTranslation("growers");
	return (
		<Page
			title={t("desk:growers.title")}
			lead={t("desk:growers.lead")}
			actions={
				<>
					<ButtonLink to={href("/desk/growers/duplicates")} kind="secondary">
						{t("list.duplicates")}
					</ButtonLink>
					<ButtonLink to={href("/desk/growers/new")} kind="secondary">
						{t("new.title")}
					</ButtonLink>
					<ButtonLink to={href("/desk/growers/import")} kind="secondary">
						{t("list.import")}
					</ButtonLink>
				</>
			}
		>
			<ErrorSummary problems={actionData?.problems} labels={viewLabels(t)} />
			<GrowerFilters {...loaderData} />
			<SavedViews views={views} parts={parts} values={actionData?.values} problems={actionData?.problems} />
			<Form method="get" action={href("/desk/growers/chosen")}>
				{Object.entries(parts).map(([name, value]) => (
					<input key={name} type="hidden" name={name} value={value} />
				))}
				{query.after && <input type="hidden" name="after" value={placeText(query.after)} />}
				{query.before && <input type="hidden" name="before" value={placeText(query.before)} />}
				<GrowerTable rows={rows} query={query} />
				{rows.length > 0 && <ChooseGrowers shown={rows.length} total={total} moreThanTotal={moreThanTotal} />}
			</Form>
			<KeyPaging before={before} after={after} total={total} moreThanTotal={moreThanTotal} />
		</Page>
	);
}

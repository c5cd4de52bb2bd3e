import { useTranslation } from "react-i18next";
import { data, Form, href, Link, redirect } from "react-router";
import { z } from "zod";
import type { Route } from "./+types/growers-merge";
import { requireAssociate } from "#app/auth/guard.server.ts";
import { sessionContext } from "#app/auth/session.server.ts";
import { listOperationSurveys } from "#app/collect/operation-surveys.server.ts";
import { ButtonLink } from "#app/components/button.tsx";
import { ChoiceField } from "#app/components/choice-field.tsx";
import { Confirm } from "#app/components/confirm.tsx";
import { DescriptionList } from "#app/components/description-list.tsx";
import { Notice } from "#app/components/notice.tsx";
import { Page } from "#app/components/page.tsx";
import { Section } from "#app/components/section.tsx";
import { type MergeField, mergeFields } from "#app/directory/merging/merge.server.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import { lookAgain } from "#app/lib/look-again.ts";
import { parseForm } from "#app/lib/parse-form.ts";
import { refusal } from "#app/lib/refusal.ts";
import { findRefusal, merge } from "./parts/merging/merge-steps.server.ts";

export async function loader({ context, params }: Route.LoaderArgs) {
	const desk = requireAssociate(context);
	const found = await desk.transaction(async (trx) => {
		const refused = await findRefusal(trx, desk.viewer, params.keptId, params.droppedId);
		if (refused === "not_found") return undefined;
		const { kept, dropped } = refused.pair;
		const surveys = await listOperationSurveys(trx, desk.viewer, dropped.operationId);
		return {
			kept,
			dropped,
			why: refused.why ?? null,
			answered: surveys.filter(({ submittedAt }) => submittedAt).length,
			fields: mergeFields.filter((field) => dropped[field] && dropped[field] !== kept[field]),
		};
	});
	if (!found) throw refusal("operation_not_found");
	return found;
}

const side = z.enum(["kept", "dropped"]).optional();
const MergeForm = z.object({
	field: z
		.object(Object.fromEntries(mergeFields.map((field) => [field, side])) as Record<MergeField, typeof side>)
		.optional(),
	planting: z.array(z.guid()).default([]),
});

export async function action({ context, params, request }: Route.ActionArgs) {
	const desk = requireAssociate(context);
	const form = parseForm(MergeForm, await request.formData());
	if (!form.ok) throw refusal("form_not_understood");
	const { field, planting } = form.value;
	const choice = { take: mergeFields.filter((name) => field?.[name] === "dropped"), plantingIds: planting };
	const outcome = await desk.transaction((trx) => merge(trx, desk.viewer, params, choice));
	if (outcome === "not_found") throw refusal("operation_not_found");
	// The page tells by itself why it is not possible now.
	if (outcome !== "merged") return data({ refused: outcome }, { status: 409 });
	context.get(sessionContext).flash("toast", { key: "growers:merge.toast.merged" });
	return redirect(href("/desk/growers/:operationId", { operationId: params.keptId }), 303);
}

type Grower = Route.ComponentProps["loaderData"]["kept"];

export const shouldRevalidate = lookAgain;

/** Two growers side by side, and what one would be of both. Nothing is merged before the last button. */
export default function GrowersMerge({ loaderData }: Route.ComponentProps) {
	const { kept, dropped, why, answered, fields } = loaderData;
	const { t } = useTranslation("growers");
	const format = useFormat();
	const swapped = { keptId: dropped.operationId, droppedId: kept.operationId };
	return (
		<Page
			title={t("merge.preview", { one: kept.name, other: dropped.name })}
			lead={t("merge.previewLead", { one: kept.name })}
		>
			<p className="no-print mb-4">
				<Link to={href("/desk/growers/duplicates")}>{t("merge.back")}</Link>
			</p>
			{why && <Notice tone="attention">{t(`merge.refused.${why}`, { other: dropped.name })}</Notice>}
			<div className="grid gap-x-10 lg:grid-cols-2">
				<Side title={t("merge.staying")} grower={kept} />
				<Side title={t("merge.going")} grower={dropped} />
			</div>
			<p className="my-4">
				<ButtonLink to={href("/desk/growers/merge/:keptId/:droppedId", swapped)} kind="secondary" size="small">
					{t("merge.swap")}
				</ButtonLink>
			</p>
			<Form method="post">
				{fields.length > 0 && (
					<Section title={t("merge.fields")}>
						{fields.map((field) => (
							<ChoiceField
								key={field}
								kind="radio"
								name={`field.${field}`}
								legend={t(`import.field.${field}`)}
								defaultValue={kept[field] ? "kept" : "dropped"}
								options={[
									{ value: "kept", label: valueOf(kept, field) || t("merge.nothing") },
									{ value: "dropped", label: valueOf(dropped, field) },
								]}
							/>
						))}
					</Section>
				)}
				<Plantings kept={kept} dropped={dropped} />
				<Section title={t("merge.what")}>
					<ul className="max-w-prose list-disc space-y-1 pl-6">
						{answered > 0 && (
							<li>{t("merge.answers", { count: answered, value: format.number(answered), other: dropped.name })}</li>
						)}
						<li>{t("merge.open")}</li>
						<li>{t("merge.people")}</li>
						<li>{t("merge.wayBack")}</li>
					</ul>
				</Section>
				{!why && (
					<div className="mt-6">
						<Confirm
							trigger={t("merge.go")}
							title={t("merge.goAsk", { one: kept.name, other: dropped.name })}
							body={t("merge.goBody")}
							confirmLabel={t("merge.go")}
						/>
					</div>
				)}
			</Form>
		</Page>
	);

	function valueOf(grower: Grower, field: MergeField): string {
		return field === "language" ? t(`common:language.${grower.language}`) : (grower[field] ?? "");
	}
}

function Side({ title, grower }: { title: string; grower: Grower }) {
	const { t } = useTranslation("growers");
	return (
		<Section title={title} level={3}>
			<DescriptionList
				items={[
					{ term: t("import.field.name"), detail: grower.name },
					{ term: t("import.field.contactName"), detail: grower.contactName },
					{ term: t("import.field.email"), detail: grower.email ?? t("mail.none") },
					{ term: t("import.field.phone"), detail: grower.phone ?? t("desk:grower.noPhone") },
					{
						term: t("import.field.county"),
						detail: t("desk:growers.county", { county: grower.countyName, state: grower.statePostal }),
					},
				]}
			/>
		</Section>
	);
}

/** Plantings that the other has and this one has not go over unless the box is cleared; like ones would be counted twice. */
function Plantings({ kept, dropped }: { kept: Grower; dropped: Grower }) {
	const { t } = useTranslation("growers");
	const format = useFormat();
	const standing = (grower: Grower) => grower.plantings.filter(({ removedOn }) => removedOn === null);
	const offered = standing(dropped);
	if (offered.length === 0) return null;
	const isThere = (planting: Grower["plantings"][number]) =>
		standing(kept).some(({ cropKey, cultivar }) => cropKey === planting.cropKey && cultivar === planting.cultivar);
	return (
		<Section title={t("merge.plantings")}>
			<ChoiceField
				kind="checkbox"
				name="planting"
				legend={t("merge.plantingsLegend")}
				help={t("merge.plantingsHelp")}
				defaultValue={offered.filter((planting) => !isThere(planting)).map(({ plantingId }) => plantingId)}
				options={offered.map((planting) => ({
					value: planting.plantingId,
					label: [
						t(`common:crop.${planting.cropKey}`),
						planting.cultivar,
						format.quantity(planting.bearingTrees, "trees"),
					]
						.filter(Boolean)
						.join(", "),
				}))}
			/>
		</Section>
	);
}

import { useTranslation } from "react-i18next";
import { data, Form, href, Link, redirect } from "react-router";
import { z } from "zod";
import type { Route } from "./+types/growers-duplicates";
import { requireAssociate } from "#app/auth/guard.server.ts";
import { sessionContext } from "#app/auth/session.server.ts";
import { Button, ButtonLink } from "#app/components/button.tsx";
import { Confirm } from "#app/components/confirm.tsx";
import { DataTable } from "#app/components/data-table.tsx";
import { EmptyState } from "#app/components/empty-state.tsx";
import { Notice } from "#app/components/notice.tsx";
import { Page } from "#app/components/page.tsx";
import { Section } from "#app/components/section.tsx";
import { listLikelyPairs, listMerges, setApart } from "#app/directory/merging/duplicates.server.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import { lookAgain } from "#app/lib/look-again.ts";
import { parseForm } from "#app/lib/parse-form.ts";
import { refusal } from "#app/lib/refusal.ts";
import { undoMerge } from "./parts/merging/merge-steps.server.ts";

export async function loader({ context }: Route.LoaderArgs) {
	const desk = requireAssociate(context);
	return desk.transaction(async (trx) => ({
		...(await listLikelyPairs(trx, desk.viewer)),
		merges: await listMerges(trx, desk.viewer),
	}));
}

const Step = z.discriminatedUnion("step", [
	z.object({ step: z.literal("apart"), a: z.guid(), b: z.guid() }),
	z.object({ step: z.literal("undo"), mergeId: z.guid() }),
]);

/** Says that two are two, or undoes a merge. */
export async function action({ context, request }: Route.ActionArgs) {
	const desk = requireAssociate(context);
	const form = parseForm(Step, await request.formData());
	if (!form.ok) throw refusal("form_not_understood");
	const { value: step } = form;
	const outcome = await desk.transaction((trx) =>
		step.step === "apart" ? setApart(trx, desk.viewer, step.a, step.b) : undoMerge(trx, desk.viewer, step.mergeId),
	);
	if (outcome === "not_found") throw refusal("operation_not_found");
	if (outcome === "changed" || outcome === "rests_on_it") return data({ refused: outcome }, { status: 409 });
	context.get(sessionContext).flash("toast", { key: `growers:merge.toast.${outcome}` });
	return redirect(href("/desk/growers/duplicates"), 303);
}

type Data = Route.ComponentProps["loaderData"];

export const shouldRevalidate = lookAgain;

export default function GrowersDuplicates({ loaderData, actionData }: Route.ComponentProps) {
	const { pairs, total, merges } = loaderData;
	const { t } = useTranslation("growers");
	const format = useFormat();
	return (
		<Page title={t("merge.title")} lead={t("merge.lead")}>
			<p className="no-print mb-4">
				<Link to={href("/desk/growers")}>{t("desk:grower.back")}</Link>
			</p>
			{actionData && <Notice tone="attention">{t(`merge.undoRefused.${actionData.refused}`)}</Notice>}
			<DataTable
				caption={t("merge.pairs")}
				captionHidden
				rows={pairs}
				rowKey={({ a, b }) => `${a.operationId} ${b.operationId}`}
				columns={[
					{ key: "a", header: t("merge.one"), cell: ({ a }) => <Who grower={a} /> },
					{ key: "b", header: t("merge.other"), cell: ({ b }) => <Who grower={b} /> },
					{
						key: "signs",
						header: t("merge.signs"),
						cell: ({ signs }) =>
							signs.map((sign) => (
								<span key={sign} className="block">
									{t(`merge.sign.${sign}`)}
								</span>
							)),
					},
					{ key: "do", header: t("merge.next"), cell: (pair) => <PairSteps {...pair} /> },
				]}
				empty={<EmptyState title={t("merge.emptyTitle")}>{t("merge.emptyBody")}</EmptyState>}
			/>
			{total > pairs.length && (
				<p className="mt-3 text-quiet">
					{t("merge.shown", { count: total, value: format.number(total), shown: pairs.length })}
				</p>
			)}
			{merges.length > 0 && <Merges merges={merges} />}
		</Page>
	);
}

function Who({ grower }: { grower: Data["pairs"][number]["a"] }) {
	const { t } = useTranslation("growers");
	const { operationId, name, contactName, email, countyName, statePostal } = grower;
	return (
		<>
			<Link to={href("/desk/growers/:operationId", { operationId })}>{name}</Link>
			<span className="block text-quiet">{contactName}</span>
			<span className="block wrap-anywhere text-quiet">{email}</span>
			<span className="block text-quiet">{t("desk:growers.county", { county: countyName, state: statePostal })}</span>
		</>
	);
}

function PairSteps({ a, b }: Data["pairs"][number]) {
	const { t } = useTranslation("growers");
	const params = { keptId: a.operationId, droppedId: b.operationId };
	const names = { one: a.name, other: b.name };
	return (
		<div className="flex flex-wrap gap-2">
			<ButtonLink
				to={href("/desk/growers/merge/:keptId/:droppedId", params)}
				kind="secondary"
				size="small"
				aria-label={t("merge.lookOf", names)}
			>
				{t("merge.look")}
			</ButtonLink>
			<Form method="post">
				<input type="hidden" name="a" value={a.operationId} />
				<input type="hidden" name="b" value={b.operationId} />
				<Button name="step" value="apart" kind="quiet" size="small" aria-label={t("merge.apartOf", names)}>
					{t("merge.apart")}
				</Button>
			</Form>
		</div>
	);
}

function Merges({ merges }: { merges: Data["merges"] }) {
	const { t } = useTranslation("growers");
	const format = useFormat();
	return (
		<Section title={t("merge.done")}>
			<DataTable
				caption={t("merge.done")}
				captionHidden
				rows={merges}
				rowKey={({ mergeId }) => mergeId}
				columns={[
					{
						key: "kept",
						header: t("merge.kept"),
						cell: ({ operationId, name }) => (
							<Link to={href("/desk/growers/:operationId", { operationId })}>{name || t("desk:grower.forgotten")}</Link>
						),
					},
					{ key: "dropped", header: t("merge.dropped"), cell: (row) => row.droppedName },
					{ key: "who", header: t("import.log.who"), cell: (row) => row.personName },
					{ key: "when", header: t("import.log.when"), cell: (row) => format.moment(row.mergedAt) },
					{ key: "undo", header: t("merge.next"), cell: (row) => <UndoMerge merge={row} /> },
				]}
			/>
		</Section>
	);
}

function UndoMerge({ merge }: { merge: Data["merges"][number] }) {
	const { t } = useTranslation("growers");
	const format = useFormat();
	if (merge.undoneAt) return t("merge.undoneOn", { day: format.dayOf(merge.undoneAt) });
	if (!merge.canUndo) return null;
	return (
		<Form method="post">
			<Confirm
				trigger={t("merge.undo")}
				title={t("merge.undoAsk", { one: merge.name, other: merge.droppedName })}
				body={t("merge.undoBody")}
				confirmLabel={t("merge.undo")}
				name="step"
				value="undo"
			>
				<input type="hidden" name="mergeId" value={merge.mergeId} />
			</Confirm>
		</Form>
	);
}

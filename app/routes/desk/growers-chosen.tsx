import { useTranslation } from "react-i18next";
import { data, href, Link, redirect } from "react-router";
import type { Route } from "./+types/growers-chosen";
import { requireAssociate } from "#app/auth/guard.server.ts";
import { sessionContext } from "#app/auth/session.server.ts";
import { countMailings } from "#app/collect/invitations.server.ts";
import { listSurveys } from "#app/collect/surveys.server.ts";
import { EmptyState } from "#app/components/empty-state.tsx";
import { Notice } from "#app/components/notice.tsx";
import { Page } from "#app/components/page.tsx";
import { queryParts } from "#app/directory/operation.schema.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import { lookAgain } from "#app/lib/look-again.ts";
import { parseForm } from "#app/lib/parse-form.ts";
import { refusal } from "#app/lib/refusal.ts";
import { actOnGrowers, BulkStep } from "./parts/growers/bulk-steps.server.ts";
import { BulkActions } from "./parts/growers/bulk-actions.tsx";
import { listChosen, readChoice } from "./parts/growers/chosen.server.ts";

/** So many names are told; the others are counted. */
const namesTold = 10;

export async function loader({ context, request }: Route.LoaderArgs) {
	const desk = requireAssociate(context);
	const choice = readChoice(request.url);
	const { viewer } = desk;
	return desk.transaction(async (trx) => {
		const { rows, operationIds, mark } = await listChosen(trx, viewer, choice);
		const open = (await listSurveys(trx, viewer)).filter(({ state }) => state === "open");
		const surveys = [];
		for (const { surveyId, title, season } of open) {
			const { toInvite, toRemind, reminderWave } = await countMailings(trx, viewer, surveyId, operationIds);
			surveys.push({ surveyId, title, season, toInvite, toRemind, reminderWave });
		}
		const active = rows.filter(({ status }) => status === "active");
		return {
			count: rows.length,
			mark,
			names: rows.slice(0, namesTold).map(({ operationId, name }) => ({ operationId, name })),
			returned: active.filter((row) => row.email && row.mailReturnedAt).length,
			toLanguage: {
				en: active.filter(({ language }) => language !== "en").length,
				es: active.filter(({ language }) => language !== "es").length,
			},
			surveys,
			back: new URLSearchParams(queryParts(choice.query)).toString(),
		};
	});
}

/** Acts on the growers of the address, if they are still those that the page counted. */
export async function action({ context, request }: Route.ActionArgs) {
	const desk = requireAssociate(context);
	const form = parseForm(BulkStep, await request.formData());
	if (!form.ok) throw refusal("form_not_understood");
	const choice = readChoice(request.url);
	const outcome = await desk.transaction(async (trx) => {
		const { operationIds, mark } = await listChosen(trx, desk.viewer, choice);
		if (mark !== form.value.mark) return "changed" as const;
		return actOnGrowers(trx, desk.viewer, operationIds, form.value);
	});
	if (outcome === "not_found") throw refusal("survey_not_found");
	if (outcome === "changed" || outcome === "not_open") return data({ refused: outcome }, { status: 409 });
	context.get(sessionContext).flash("toast", outcome.toast);
	return redirect(`${href("/desk/growers")}?${new URLSearchParams(queryParts(choice.query))}`, 303);
}

export const shouldRevalidate = lookAgain;

export default function GrowersChosen({ loaderData, actionData }: Route.ComponentProps) {
	const { count, names, back } = loaderData;
	const { t } = useTranslation("growers");
	const format = useFormat();
	const backLink = <Link to={`${href("/desk/growers")}?${back}`}>{t("chosen.back")}</Link>;
	if (count === 0)
		return (
			<Page title={t("chosen.noneTitle")}>
				<EmptyState title={t("chosen.noneTitle")} action={backLink}>
					{t("chosen.noneBody")}
				</EmptyState>
			</Page>
		);
	const others = count - names.length;
	return (
		<Page title={t("chosen.title", { count, value: format.number(count) })}>
			<p className="mb-4">{backLink}</p>
			{actionData?.refused && <Notice tone="attention">{t(`chosen.refused.${actionData.refused}`)}</Notice>}
			<ul className="max-w-prose list-disc pl-6">
				{names.map(({ operationId, name }) => (
					<li key={operationId}>
						<Link to={href("/desk/growers/:operationId", { operationId })}>{name}</Link>
					</li>
				))}
				{others > 0 && <li>{t("chosen.others", { count: others, value: format.number(others) })}</li>}
			</ul>
			<BulkActions {...loaderData} />
		</Page>
	);
}

import { useTranslation } from "react-i18next";
import { data, Form, href, Link, redirect } from "react-router";
import { z } from "zod";
import type { Route } from "./+types/form-versions";
import { sessionContext } from "#app/auth/session.server.ts";
import {
	changesToPublish,
	type ListedVersion,
	listVersions,
	moveSurvey,
	resetDraft,
	type VersionSurvey,
} from "#app/collect/editing/form-versions.server.ts";
import { isId } from "#app/collect/surveys.server.ts";
import { Confirm } from "#app/components/confirm.tsx";
import { EmptyState } from "#app/components/empty-state.tsx";
import { Notice } from "#app/components/notice.tsx";
import { Section } from "#app/components/section.tsx";
import { useFormat } from "#app/i18n/use-format.ts";
import { lookAgain } from "#app/lib/look-again.ts";
import { parseForm } from "#app/lib/parse-form.ts";
import { refusal } from "#app/lib/refusal.ts";
import { useFormWords } from "./parts/forms/condition-words.ts";
import { Differences } from "./parts/forms/differences.tsx";
import { getForm } from "./parts/forms/form-access.server.ts";

export async function loader({ context, params }: Route.LoaderArgs) {
	const { desk, form } = await getForm(context, params.formId);
	// A ready form ships with the product, and has no versions to choose from here.
	const versions = isId(params.formId)
		? await desk.transaction((trx) => listVersions(trx, desk.viewer, params.formId))
		: [];
	return { versions, mayEdit: form.mayEdit, changes: changesToPublish(form), isReady: !isId(params.formId) };
}

const Step = z.discriminatedUnion("intent", [
	z.object({ intent: z.literal("move"), surveyId: z.guid() }),
	z.object({ intent: z.literal("reset") }),
]);

export async function action({ context, params, request }: Route.ActionArgs) {
	const { desk } = await getForm(context, params.formId);
	const parsed = parseForm(Step, await request.formData());
	if (!parsed.ok) throw refusal("form_not_understood");
	const { value: step } = parsed;
	const outcome = await desk.transaction(async (trx) =>
		step.intent === "move"
			? moveSurvey(trx, desk.viewer, params.formId, step.surveyId)
			: resetDraft(trx, desk.viewer, params.formId),
	);
	if (outcome === "not_found") throw refusal("form_not_found");
	if (outcome === "keeps_version") return data({ refused: outcome }, { status: 409 });
	const toast = step.intent === "move" ? "forms:toast.moved" : "forms:toast.reset";
	context.get(sessionContext).flash("toast", { key: toast });
	return redirect(href("/desk/forms/:formId/versions", params), 303);
}

export const shouldRevalidate = lookAgain;

/** What was published when, what each version changed, and which surveys ask it. */
export default function FormVersions({ loaderData, actionData, params }: Route.ComponentProps) {
	const { t } = useTranslation("forms");
	const { versions, mayEdit, changes, isReady } = loaderData;
	const newest = versions[0];
	return (
		<>
			{actionData && (
				<div role="alert">
					<Notice tone="attention">{t(`versions.refused.${actionData.refused}`)}</Notice>
				</div>
			)}
			{!newest && (
				<EmptyState title={t(isReady ? "versions.readyTitle" : "versions.emptyTitle")}>
					{t(isReady ? "versions.readyBody" : "versions.emptyBody")}
				</EmptyState>
			)}
			{newest && mayEdit && (
				<Section title={t("versions.draft")}>
					<Differences differences={changes} />
					{changes.length > 0 && (
						<div className="mt-4 flex flex-wrap items-start gap-4">
							<Link to={href("/desk/forms/:formId/check", params)} className="inline-flex min-h-11 items-center">
								{t("versions.toCheck")}
							</Link>
							<Form method="post">
								<Confirm
									trigger={t("versions.reset")}
									title={t("versions.resetAsk")}
									body={t("versions.resetBody")}
									confirmLabel={t("versions.reset")}
									name="intent"
									value="reset"
								/>
							</Form>
						</div>
					)}
				</Section>
			)}
			{versions.map((version) => (
				<Version key={version.formVersionId} version={version} newest={newest!} />
			))}
		</>
	);
}

function Version({ version, newest }: { version: ListedVersion; newest: ListedVersion }) {
	const { t } = useTranslation("forms");
	const format = useFormat();
	const { publisherName: name } = version;
	const when = format.moment(version.publishedAt);
	return (
		<Section title={t("versions.name", { version: format.number(version.version) })}>
			<p className="mb-3 text-quiet">{name ? t("versions.by", { name, when }) : t("versions.at", { when })}</p>
			{version.version > 1 && <Differences differences={version.differences} />}
			{version.surveys.length > 0 && (
				<>
					<p className="mb-1 mt-4 font-bold">{t("versions.surveys")}</p>
					<ul className="list-none space-y-2">
						{version.surveys.map((survey) => (
							<li key={survey.surveyId}>
								<AskingSurvey survey={survey} isNewest={version === newest} newest={newest.version} />
							</li>
						))}
					</ul>
				</>
			)}
		</Section>
	);
}

type AskingSurveyProps = { survey: VersionSurvey; isNewest: boolean; newest: number };

/** A survey keeps its version; it goes over to the newest one when somebody says so, and only where nothing else changes. */
function AskingSurvey({ survey, isNewest, newest }: AskingSurveyProps) {
	const { t } = useTranslation("forms");
	const format = useFormat();
	const title = useFormWords()(survey.title);
	const { surveyId, season, state } = survey;
	return (
		<div className="flex flex-wrap items-center gap-x-4 gap-y-2">
			<Link to={href("/desk/surveys/:surveyId", { surveyId })}>{t("desk:surveys.name", { title, season })}</Link>
			<span className="text-sm text-quiet">{t(`common:surveyState.${state}`)}</span>
			{survey.mayMove && (
				<Form method="post">
					<Confirm
						trigger={t("versions.move", { version: format.number(newest) })}
						title={t("versions.moveAsk", { title, version: format.number(newest) })}
						body={t(state === "draft" ? "versions.moveBodyDraft" : "versions.moveBodyOpen")}
						confirmLabel={t("versions.moveConfirm")}
						name="intent"
						value="move"
					>
						<input type="hidden" name="surveyId" value={surveyId} />
					</Confirm>
				</Form>
			)}
			{!survey.mayMove && !isNewest && state === "open" && (
				<span className="text-sm text-quiet">{t("versions.keeps")}</span>
			)}
		</div>
	);
}

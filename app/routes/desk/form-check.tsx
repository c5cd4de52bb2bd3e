import { useTranslation } from "react-i18next";
import { data, Form, href, Link, redirect } from "react-router";
import { z } from "zod";
import type { Route } from "./+types/form-check";
import { sessionContext } from "#app/auth/session.server.ts";
import { type Finding, findingsOf } from "#app/collect/editing/before-opening.ts";
import { changesToPublish, publishForm } from "#app/collect/editing/form-versions.server.ts";
import { estimateMinutes } from "#app/collect/editing/minutes.ts";
import { Confirm } from "#app/components/confirm.tsx";
import { Notice } from "#app/components/notice.tsx";
import { Section } from "#app/components/section.tsx";
import { useFormat } from "#app/i18n/use-format.ts";
import { lookAgain } from "#app/lib/look-again.ts";
import { parseForm } from "#app/lib/parse-form.ts";
import { refusal } from "#app/lib/refusal.ts";
import { Differences } from "./parts/forms/differences.tsx";
import { useFindingWords } from "./parts/forms/finding-words.ts";
import { getForm, getOwnForm } from "./parts/forms/form-access.server.ts";

export async function loader({ context, params }: Route.LoaderArgs) {
	const { form } = await getForm(context, params.formId);
	const { draft, held, published, edit, mayEdit } = form;
	return {
		draft,
		edit,
		mayEdit,
		version: published?.version ?? 0,
		minutes: estimateMinutes(draft.screens),
		findings: findingsOf(draft, new Set(held), published?.definition),
		changes: changesToPublish(form),
	};
}

const Publish = z.object({ edit: z.coerce.number().int() });

export async function action({ context, params, request }: Route.ActionArgs) {
	const { desk } = await getOwnForm(context, params.formId);
	const parsed = parseForm(Publish, await request.formData());
	if (!parsed.ok) throw refusal("form_not_understood");
	const outcome = await desk.transaction((trx) => publishForm(trx, desk.viewer, params.formId, parsed.value.edit));
	if (outcome === "not_found") throw refusal("form_not_found");
	if (typeof outcome === "string") return data({ refused: outcome }, { status: 409 });
	const { version } = outcome;
	context.get(sessionContext).flash("toast", { key: `forms:toast.${outcome.outcome}`, values: { version } });
	return redirect(href("/desk/forms/:formId/versions", params), 303);
}

export const shouldRevalidate = lookAgain;

/** What is to be mended before the form is asked, then what to think about, and the button that freezes a version. */
export default function FormCheck({ loaderData, actionData, params }: Route.ComponentProps) {
	const { t } = useTranslation("forms");
	const format = useFormat();
	const { draft, edit, mayEdit, version, minutes, findings, changes } = loaderData;
	const blocking = findings.filter(({ blocks }) => blocks);
	const others = findings.filter(({ blocks }) => !blocks);
	const wordsOf = useFindingWords(params.formId, draft);
	const isChanged = version === 0 || changes.length > 0;
	return (
		<>
			{actionData && (
				<div role="alert">
					<Notice tone="attention">{t(`publish.refused.${actionData.refused}`)}</Notice>
				</div>
			)}
			<p className="text-lg">
				{t(blocking.length === 0 ? "finding.ready" : "finding.toMend", {
					count: blocking.length,
					value: format.number(blocking.length),
				})}{" "}
				{t("parts.minutes", { count: minutes, value: format.number(minutes) })}
			</p>
			{blocking.length > 0 && (
				<Section title={t("finding.blocking")}>
					<Findings findings={blocking} wordsOf={wordsOf} />
				</Section>
			)}
			{others.length > 0 && (
				<Section title={t("finding.others")}>
					<Findings findings={others} wordsOf={wordsOf} />
				</Section>
			)}
			{mayEdit && version > 0 && (
				<Section title={t("publish.changes", { version: format.number(version) })}>
					<Differences differences={changes} />
				</Section>
			)}
			{mayEdit && blocking.length === 0 && isChanged && (
				<Section title={t("publish.title")}>
					<p className="mb-4 max-w-prose">{t("publish.body")}</p>
					<Form method="post">
						<Confirm
							trigger={t("publish.button", { version: format.number(version + 1) })}
							title={t("publish.ask", { version: format.number(version + 1) })}
							body={t("publish.confirmBody")}
							confirmLabel={t("publish.confirm")}
						>
							<input type="hidden" name="edit" value={edit} />
						</Confirm>
					</Form>
				</Section>
			)}
		</>
	);
}

type FindingsProps = { findings: Finding[]; wordsOf: ReturnType<typeof useFindingWords> };

function Findings({ findings, wordsOf }: FindingsProps) {
	return (
		<ul className="list-none divide-y divide-rule">
			{findings.map((finding) => {
				const { place, words, to } = wordsOf(finding);
				return (
					<li key={JSON.stringify(finding)} className="py-2">
						<Link to={to}>{place}</Link>
						<p>{words}</p>
					</li>
				);
			})}
		</ul>
	);
}

import { useTranslation } from "react-i18next";
import { data, Form, href, Link, redirect } from "react-router";
import { z } from "zod";
import type { Route } from "./+types/form-edit-check";
import { sessionContext } from "#app/auth/session.server.ts";
import { questionsUpTo } from "#app/collect/editing/condition-lines.ts";
import { findScreen } from "#app/collect/editing/draft.ts";
import { putCheck, removeCheck } from "#app/collect/editing/edit-screens.ts";
import { fingerprintOf } from "#app/collect/editing/form-drafts.server.ts";
import { CheckFields as Fields, fieldsOfCheck, readCheckFields } from "#app/collect/editing/screen.schema.ts";
import { Button } from "#app/components/button.tsx";
import { ChoiceField } from "#app/components/choice-field.tsx";
import { ErrorSummary } from "#app/components/error-summary.tsx";
import { Section } from "#app/components/section.tsx";
import { getLanguage } from "#app/i18n/middleware.server.ts";
import { lookAgain } from "#app/lib/look-again.ts";
import { parseForm, type Problem } from "#app/lib/parse-form.ts";
import { refusal } from "#app/lib/refusal.ts";
import { ConditionFields, useConditionLabels } from "./parts/forms/condition-fields.tsx";
import { EditorFrame } from "./parts/forms/editor-frame.tsx";
import { getOwnForm, makeChange, type NotChanged } from "./parts/forms/form-access.server.ts";
import { NotChangedNotice } from "./parts/forms/not-changed.tsx";
import { TextPair, usePairLabels } from "./parts/forms/text-pair.tsx";

/** One edit check of a screen; the address of a new one ends in "new". */
export async function loader({ context, params }: Route.LoaderArgs) {
	const { form } = await getOwnForm(context, params.formId);
	const screen = findScreen(form.draft, params.key);
	const check = screen?.checks?.find(({ key }) => key === params.check);
	if (!screen || (!check && params.check !== "new")) throw refusal("form_not_found");
	return { draft: form.draft, screen, check: check ?? null, seen: fingerprintOf(check ?? null) };
}

const Sent = Fields.extend({ intent: z.enum(["save", "remove"]), seen: z.string().max(40) });

export async function action({ context, params, request }: Route.ActionArgs) {
	const { desk } = await getOwnForm(context, params.formId);
	const parsed = parseForm(Sent, await request.formData());
	// The page's own controls cannot make such a form: a forged or broken one. What is amiss in a text is told below.
	if (!parsed.ok) throw refusal("form_not_understood");
	const { intent, seen, ...fields } = parsed.value;
	const language = getLanguage(context);
	let problems: Problem[] = [];
	const made = await makeChange(desk, params.formId, (draft) => {
		const screen = findScreen(draft, params.key);
		const before = screen?.checks?.find(({ key }) => key === params.check);
		if (!screen) return "not_found";
		if (fingerprintOf(before ?? null) !== seen) return "changed_meanwhile";
		if (intent === "remove") return removeCheck(draft, params.key, params.check);
		const read = readCheckFields(fields, draft, screen, before, language);
		problems = read.problems;
		return read.value ? putCheck(draft, params.key, read.value) : draft;
	});
	if (problems.length > 0) return answer(null, fields, problems);
	if (typeof made === "string") return answer(made, fields, []);
	context.get(sessionContext).flash("toast", { key: "forms:toast.saved" });
	return redirect(href("/desk/forms/:formId/screens/:key", params), 303);
}

export const shouldRevalidate = lookAgain;

/** @returns 409 for what cannot be done now, 400 for what is to be mended. */
function answer(refused: NotChanged | null, values: Fields, problems: Problem[]) {
	return data({ refused, values, problems }, { status: refused ? 409 : 400 });
}

const blank: Fields = { kind: "soft", message: { en: "", es: "" }, when: { join: "all", unsure: "ask", lines: [] } };

export default function FormEditCheck({ loaderData, actionData, params }: Route.ComponentProps) {
	const { t } = useTranslation("forms");
	const { draft, screen, check, seen } = loaderData;
	const conditions = useConditionLabels();
	const value = actionData?.values ?? (check ? fieldsOfCheck(check) : blank);
	const inBoth = usePairLabels();
	const labels = { ...inBoth({ message: t("check.message") }), ...conditions("when") };
	return (
		<EditorFrame formId={params.formId} draft={draft} preview={screen}>
			<p className="mb-4">
				<Link to={href("/desk/forms/:formId/screens/:key", params)}>{t("check.back")}</Link>
			</p>
			<ErrorSummary problems={actionData?.problems} labels={labels} />
			<NotChangedNotice answer={actionData} />
			<Form method="post" noValidate key={actionData ? "sent" : seen}>
				<input type="hidden" name="seen" value={seen} />
				<ChoiceField
					kind="radio"
					name="kind"
					legend={t("check.kind.legend")}
					options={(["soft", "hard"] as const).map((kind) => ({
						value: kind,
						label: t(`check.kind.${kind}`),
						help: t(`check.kind.${kind}Help`),
					}))}
					defaultValue={value.kind}
				/>
				<TextPair
					name="message"
					label={t("check.message")}
					help={t("check.messageHelp")}
					value={value.message}
					problems={actionData?.problems}
					rows={2}
					isNew={check === null}
				/>
				<Section title={t("check.odd")} level={3}>
					<ConditionFields
						name="when"
						value={value.when}
						kept={check?.when}
						draft={draft}
						offered={questionsUpTo(draft, screen, true)}
						problems={actionData?.problems}
					/>
				</Section>
				<div className="flex flex-wrap gap-3">
					<Button name="intent" value="save">
						{t("check.save")}
					</Button>
					{check && (
						<Button kind="danger" name="intent" value="remove">
							{t("check.remove")}
						</Button>
					)}
				</div>
			</Form>
		</EditorFrame>
	);
}

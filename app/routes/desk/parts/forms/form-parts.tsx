import { useTranslation } from "react-i18next";
import { Form, href, Link } from "react-router";
import type { FormDraft } from "#app/collect/editing/draft.ts";
import { estimateMinutes } from "#app/collect/editing/minutes.ts";
import { isUntranslated } from "#app/collect/editing/untranslated.ts";
import type { Question, Screen } from "#app/collect/form.ts";
import { Button } from "#app/components/button.tsx";
import { EmptyState } from "#app/components/empty-state.tsx";
import { Section } from "#app/components/section.tsx";
import { StatusBadge } from "#app/components/status-badge.tsx";
import { useFocusOnHash } from "#app/components/use-focus-on-hash.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import { useConditionWords, useFormWords } from "./condition-words.ts";

type FormPartsProps = { formId: string; draft: FormDraft; held: string[]; mayEdit: boolean };

/** The whole form: its screens, their questions, what each waits for; and the buttons that put them in order. */
export function FormParts(props: FormPartsProps) {
	const { draft, mayEdit } = props;
	const { t } = useTranslation("forms");
	const format = useFormat();
	useFocusOnHash();
	if (draft.screens.length === 0)
		return mayEdit ? <EmptyState title={t("parts.emptyTitle")}>{t("parts.emptyBody")}</EmptyState> : null;
	const minutes = estimateMinutes(draft.screens);
	return (
		<>
			<p>{t("parts.minutes", { count: minutes, value: format.number(minutes) })}</p>
			<Form method="post" preventScrollReset>
				<input type="hidden" name="intent" value="move" />
				{draft.screens.map((screen, index) => (
					<ScreenPart key={screen.key} {...props} screen={screen} number={index + 1} />
				))}
			</Form>
		</>
	);
}

type ScreenPartProps = FormPartsProps & { screen: Screen; number: number };

function ScreenPart({ formId, draft, held, mayEdit, screen, number }: ScreenPartProps) {
	const { t } = useTranslation("forms");
	const said = useFormWords();
	const inWords = useConditionWords(draft);
	const title = t("outline.screen", { number, title: said(screen.title) });
	const { questions, ...own } = screen;
	const to = href("/desk/forms/:formId/screens/:key", { formId, key: screen.key });
	return (
		<Section
			id={`screen-${screen.key}`}
			title={title}
			actions={
				<>
					<Link to={to} className="inline-flex min-h-9 items-center" aria-label={t("parts.openOf", { name: title })}>
						{t(mayEdit ? "parts.edit" : "parts.open")}
					</Link>
					{mayEdit && <MoveButtons what="screen" of={screen.key} name={title} />}
				</>
			}
		>
			<p className="flex flex-wrap gap-3 text-sm text-quiet">
				{screen.perPlanting && <span>{t("parts.perPlanting")}</span>}
				{screen.condition && <span>{t("parts.when", { condition: inWords(screen.condition) })}</span>}
				{isUntranslated(own) && <Untranslated />}
			</p>
			{questions.length === 0 && <p className="mt-2">{t("parts.noQuestion")}</p>}
			<ol className="list-none divide-y divide-rule">
				{questions.map((question) => (
					<QuestionPart
						key={question.key}
						formId={formId}
						draft={draft}
						question={question}
						isHeld={held.includes(question.key)}
						mayEdit={mayEdit}
					/>
				))}
			</ol>
		</Section>
	);
}

type QuestionPartProps = Omit<FormPartsProps, "held"> & { question: Question; isHeld: boolean };

function QuestionPart({ formId, draft, question, isHeld, mayEdit }: QuestionPartProps) {
	const { t } = useTranslation("forms");
	const said = useFormWords();
	const inWords = useConditionWords(draft);
	const name = said(question.text);
	return (
		<li
			id={`question-${question.key}`}
			tabIndex={-1}
			className="flex flex-wrap items-start justify-between gap-x-6 gap-y-2 py-3"
		>
			<div className="min-w-0 flex-1 basis-72">
				<Link to={href("/desk/forms/:formId/questions/:key", { formId, key: question.key })}>{name}</Link>
				<p className="mt-1 flex flex-wrap items-center gap-x-3 gap-y-1 text-sm text-quiet">
					<span>{t(`type.${question.type}`)}</span>
					{question.required && <span>{t("parts.required")}</span>}
					{question.condition && <span>{t("parts.when", { condition: inWords(question.condition) })}</span>}
					{isHeld && <StatusBadge tone="neutral">{t("parts.answered")}</StatusBadge>}
					{isUntranslated(question) && <Untranslated />}
				</p>
			</div>
			{mayEdit && (
				<div className="no-print flex gap-3">
					<MoveButtons what="question" of={question.key} name={name} />
				</div>
			)}
		</li>
	);
}

function Untranslated() {
	const { t } = useTranslation("forms");
	return <StatusBadge tone="attention">{t("outline.untranslated")}</StatusBadge>;
}

function MoveButtons({ what, of, name }: { what: "question" | "screen"; of: string; name: string }) {
	const { t } = useTranslation("forms");
	return (["up", "down"] as const).map((way) => (
		<Button
			key={way}
			id={`move-${what}-${way}-${of}`}
			kind="secondary"
			size="small"
			name="what"
			value={`${what}:${way}:${of}`}
			aria-label={t(`move.${way}Of`, { name })}
		>
			{t(`move.${way}`)}
		</Button>
	));
}

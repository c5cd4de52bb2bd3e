import { useTranslation } from "react-i18next";
import { href, NavLink } from "react-router";
import type { FormDraft } from "#app/collect/editing/draft.ts";
import type { Question, Screen } from "#app/collect/form.ts";
import { isUntranslated } from "#app/collect/editing/untranslated.ts";
import { useFormWords } from "./condition-words.ts";

type OutlineProps = { formId: string; draft: FormDraft };

const look =
	"block rounded-plat px-2 py-2 text-ink no-underline hover:bg-sheet aria-[current=page]:bg-damson-wash aria-[current=page]:font-bold";

/** The form at a glance: its screens and their questions, each a link, with what is not translated yet. */
export function Outline({ formId, draft }: OutlineProps) {
	const { t } = useTranslation("forms");
	return (
		<nav aria-label={t("outline.label")} id="outline" className="max-h-[85vh] overflow-y-auto text-sm">
			<NavLink to={href("/desk/forms/:formId", { formId })} end className={look}>
				{t("outline.whole")}
			</NavLink>
			<ol className="list-none">
				{draft.screens.map((screen, index) => (
					<li key={screen.key} className="mt-2 border-t border-rule pt-2">
						<ScreenLink formId={formId} screen={screen} number={index + 1} />
						<ol className="list-none pl-3">
							{screen.questions.map((question) => (
								<li key={question.key}>
									<QuestionLink formId={formId} question={question} />
								</li>
							))}
						</ol>
					</li>
				))}
			</ol>
		</nav>
	);
}

function ScreenLink({ formId, screen, number }: { formId: string; screen: Screen; number: number }) {
	const { t } = useTranslation("forms");
	const title = useFormWords()(screen.title);
	const { questions: _, ...own } = screen;
	return (
		<NavLink to={href("/desk/forms/:formId/screens/:key", { formId, key: screen.key })} className={look}>
			{t("outline.screen", { number, title })}
			<Mark shown={isUntranslated(own)} />
		</NavLink>
	);
}

function QuestionLink({ formId, question }: { formId: string; question: Question }) {
	const said = useFormWords();
	return (
		<NavLink to={href("/desk/forms/:formId/questions/:key", { formId, key: question.key })} className={look}>
			{said(question.label ?? question.text)}
			<Mark shown={isUntranslated(question)} />
		</NavLink>
	);
}

function Mark({ shown }: { shown: boolean }) {
	const { t } = useTranslation("forms");
	if (!shown) return null;
	return <span className="ml-2 font-bold text-attention">◆ {t("outline.untranslated")}</span>;
}

import { useTranslation } from "react-i18next";
import { useNavigation } from "react-router";
import type { FormDraft } from "#app/collect/editing/draft.ts";
import type { Measure, Question, Screen } from "#app/collect/form.ts";
import { Button } from "#app/components/button.tsx";
import { Confirm } from "#app/components/confirm.tsx";
import { Section } from "#app/components/section.tsx";
import { useFormat } from "#app/i18n/use-format.ts";
import { useFormWords } from "./condition-words.ts";

type QuestionActionsProps = {
	draft: FormDraft;
	screen: Screen;
	question: Question;
	isHeld: boolean;
	measures: Measure[];
};

/** The buttons of the question's form. Each saves what is typed, then does its own act. */
export function QuestionActions({ draft, screen, question, isHeld, measures }: QuestionActionsProps) {
	const { t } = useTranslation("forms");
	const said = useFormWords();
	const format = useFormat();
	const busy = useNavigation().state === "submitting";
	const named = format.list(measures.map(({ label }) => said(label)));
	return (
		<>
			<div className="sticky bottom-0 z-20 border-t-2 border-line bg-paper py-3">
				<Button name="intent" value="save" busy={busy}>
					{t("question.save")}
				</Button>
			</div>
			<Section id="place" title={t("question.place")} level={3}>
				<p>
					{t("question.placeNow", {
						number: format.number(screen.questions.indexOf(question) + 1),
						value: format.number(screen.questions.length),
						screen: said(screen.title),
					})}
				</p>
				<p className="mb-3 text-quiet">{t("question.placeHelp")}</p>
				<div className="flex flex-wrap gap-3">
					<Button id="move-up" kind="secondary" size="small" name="intent" value="up">
						{t("move.up")}
					</Button>
					<Button id="move-down" kind="secondary" size="small" name="intent" value="down">
						{t("move.down")}
					</Button>
					{draft.screens
						.filter((other) => other.key !== screen.key && (!isHeld || other.perPlanting === screen.perPlanting))
						.map((other) => (
							<Button key={other.key} kind="secondary" size="small" name="intent" value={`to:${other.key}`}>
								{t("move.to", { screen: said(other.title) })}
							</Button>
						))}
				</div>
			</Section>
			<Section title={t("question.copyRemove")} level={3}>
				<div className="flex flex-wrap gap-3">
					<Button kind="secondary" name="intent" value="copy">
						{t("question.copy")}
					</Button>
					{isHeld ? (
						<p className="max-w-prose text-quiet">{t("question.held")}</p>
					) : (
						<Confirm
							trigger={t("question.remove")}
							title={t("question.removeAsk")}
							body={named ? t("question.removeMeasures", { measures: named }) : t("question.removeBody")}
							confirmLabel={t("question.remove")}
							name="intent"
							value="remove"
							danger
						/>
					)}
				</div>
			</Section>
		</>
	);
}

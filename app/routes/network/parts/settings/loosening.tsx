import { useTranslation } from "react-i18next";
import { Button } from "#app/components/button.tsx";
import { NotDone } from "#app/components/notice.tsx";
import type { RuleMove } from "#app/release/rules-change.ts";
import { useToldMove } from "./rule-words.ts";

type LooseningProps = { loosening: RuleMove[]; agreement: string; formId: string; answer: unknown };

/** Asks before settings under which more is published than before. Its button sends the form as it was typed. */
export function Loosening({ loosening, agreement, formId, answer }: LooseningProps) {
	const { t } = useTranslation("network");
	const told = useToldMove();
	return (
		<NotDone answer={answer} tone="caution" title={t("settings.loosensTitle")}>
			<ul className="mt-2 list-disc space-y-2 pl-5">
				{loosening.map((move) => (
					<li key={move.name}>
						<span className="block font-bold">{told(move)}</span>
						{t(`settings.rule.${move.name}.looser`)}
					</li>
				))}
			</ul>
			<p className="mb-4 mt-3">{t("settings.loosensBody")}</p>
			<Button form={formId} name="agreed" value={agreement} kind="danger">
				{t("settings.loosensConfirm")}
			</Button>
		</NotDone>
	);
}

import { useTranslation } from "react-i18next";
import { AnswerText } from "#app/components/answer-list.tsx";
import { Section } from "#app/components/section.tsx";
import { useFormat } from "#app/i18n/use-format.ts";
import type { FindingView } from "./finding-view.server.ts";

/** All that happened, with who did it and why. Nothing of it can be changed. */
export function FindingHistory({ view: { steps, history, finding } }: { view: FindingView }) {
	const { t } = useTranslation("checks");
	const format = useFormat();
	const corrections = history.filter(({ act }) => act === "corrected");
	return (
		<Section title={t("history.title")}>
			<ol className="border-t border-rule">
				{steps.map(({ number, step, words, at, personName }) => (
					<li key={number} className="border-b border-rule py-2">
						<span className="font-bold">{t(`history.step.${step}`)}</span>{" "}
						<span className="text-quiet">
							{[format.moment(at, finding.timeZone), personName].filter(Boolean).join(" · ")}
						</span>
						{words && <span className="block whitespace-pre-line">{t("history.words", { words })}</span>}
					</li>
				))}
			</ol>
			{corrections.map(({ number, shown, put, madeAt, madeBy }) => (
				<p key={number} className="mt-3">
					{t("history.corrected")} <AnswerText shown={shown.shown} /> → {put && <AnswerText shown={put.shown} />}{" "}
					<span className="text-quiet">{[format.moment(madeAt, finding.timeZone), madeBy].join(" · ")}</span>
				</p>
			))}
		</Section>
	);
}

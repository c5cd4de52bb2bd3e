import { useEffect, useRef } from "react";
import { useTranslation } from "react-i18next";
import type { EntryCheck } from "#app/collect/read-entry.ts";
import type { Step } from "#app/collect/steps.ts";
import { AnswerText } from "#app/components/answer-list.tsx";
import { Notice } from "#app/components/notice.tsx";
import { useStepTitle } from "#app/components/step-title.ts";
import { wordsIn } from "#app/i18n/language.ts";

type EntryChecksProps = { checks: EntryCheck[]; steps: Step[]; confirmed: string[] };

/** Odd answers, each to be asked about once more while the grower is on the line; a tick says that it is right. */
export function EntryChecks({ checks, steps, confirmed }: EntryChecksProps) {
	const { t, i18n } = useTranslation("answered");
	const titleOf = useStepTitle();
	const box = useRef<HTMLDivElement>(null);
	const ids = checks.map(({ id }) => id).join();
	useEffect(() => {
		if (ids !== "") box.current?.focus();
	}, [ids]);
	return (
		<>
			{/* What was confirmed before stays so while its values are the same. */}
			{confirmed.map((id) => (
				<input key={id} type="hidden" name="confirm" value={id} />
			))}
			{checks.length > 0 && (
				<div ref={box} tabIndex={-1} role="alert" className="mt-6 max-w-prose">
					<Notice tone="attention" title={t("grower:check.title", { count: checks.length })}>
						<ul className="list-none space-y-3">
							{checks.map(({ id, stepKey, about, message }) => (
								<li key={id}>
									<label className="flex items-start gap-3">
										<input type="checkbox" name="confirm" value={id} className="mt-1 size-5 shrink-0 accent-damson" />
										<span>
											<span className="block text-sm text-quiet">
												{steps.filter(({ key }) => key === stepKey).map((step) => titleOf(step))}
											</span>
											{about.map(({ label, shown }) => (
												<span key={label.en} className="block">
													<span className="font-bold">{wordsIn(label, i18n.language)}:</span>{" "}
													<AnswerText shown={shown} />
												</span>
											))}
											{typeof message === "string" ? t(`grower:check.${message}`) : wordsIn(message, i18n.language)}
										</span>
									</label>
								</li>
							))}
						</ul>
						<p className="mt-3">{t("enter.askAgain")}</p>
					</Notice>
				</div>
			)}
		</>
	);
}

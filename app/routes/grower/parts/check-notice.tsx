import { useEffect, useRef } from "react";
import { useTranslation } from "react-i18next";
import type { CheckToAsk } from "#app/collect/checks-to-ask.ts";
import { AnswerText } from "#app/components/answer-list.tsx";
import { Button } from "#app/components/button.tsx";
import { Notice } from "#app/components/notice.tsx";
import { wordsIn } from "#app/i18n/language.ts";

/**
 * Asks once whether odd answers are right; one tap says so, or they are changed below. Belongs inside the screen's form,
 * so that what was typed meanwhile goes along.
 */
export function CheckNotice({ checks, busy }: { checks: CheckToAsk[]; busy: boolean }) {
	const { t, i18n } = useTranslation("grower");
	const box = useRef<HTMLDivElement>(null);
	const keys = checks.map(({ key }) => key).join(" ");
	useEffect(() => {
		if (keys !== "") box.current?.focus();
	}, [keys]);
	if (checks.length === 0) return null;
	return (
		<div ref={box} tabIndex={-1} role="alert" className="mb-8">
			{/* The Enter key presses the first button of a form: it must go on, and never confirm. */}
			<button hidden tabIndex={-1} aria-hidden="true" />
			<Notice tone="attention" title={t("check.title", { count: checks.length })}>
				<ul className="list-none space-y-3">
					{checks.map(({ key, about, message }) => (
						<li key={key}>
							{about.map(({ label, shown }) => (
								<p key={label.en}>
									<span className="font-bold">{wordsIn(label, i18n.language)}:</span> <AnswerText shown={shown} />
								</p>
							))}
							<p>{typeof message === "string" ? t(`check.${message}`) : wordsIn(message, i18n.language)}</p>
						</li>
					))}
				</ul>
				<div className="mt-4">
					<Button kind="secondary" name="confirm" value={keys} busy={busy}>
						{t("check.yes", { count: checks.length })}
					</Button>
				</div>
				<p className="mt-3">{t("check.otherwise")}</p>
			</Notice>
		</div>
	);
}

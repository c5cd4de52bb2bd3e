import { useEffect, useRef } from "react";
import { useTranslation } from "react-i18next";
import type { Problem } from "#app/lib/parse-form.ts";
import { fieldId } from "./field-frame.tsx";
import { useProblemText } from "./problem-text.ts";

type ErrorSummaryProps = { problems: Problem[] | undefined; labels: Record<string, string> };

/** What needs mending, on top of a form, with a link to each field. Takes the focus when it appears. */
export function ErrorSummary({ problems, labels }: ErrorSummaryProps) {
	const { t } = useTranslation();
	const words = useProblemText();
	const box = useRef<HTMLDivElement>(null);
	const prefix = t("summary.titlePrefix");
	useEffect(() => {
		if (!problems?.length) return;
		box.current?.focus();
		// A form sent by a fetcher leaves the page's own title as it was.
		if (!document.title.startsWith(prefix)) document.title = prefix + document.title;
	}, [problems, prefix]);
	if (!problems?.length) return null;
	return (
		<div
			ref={box}
			tabIndex={-1}
			role="alert"
			aria-labelledby="error-summary-title"
			className="mb-8 border-4 border-stop bg-stop-wash p-5"
		>
			<h2 id="error-summary-title" className="text-lg">
				{t("summary.title", { count: problems.length })}
			</h2>
			<ul className="mt-2 list-none space-y-1">
				{problems.map((problem) => (
					<li key={`${problem.field} ${problem.code}`}>
						<a href={`#${fieldId(problem.field)}`} className="inline-block py-1 font-bold text-stop">
							{words(problem, labels[problem.field] ?? t("problem.your_answer"))}
						</a>
					</li>
				))}
			</ul>
		</div>
	);
}

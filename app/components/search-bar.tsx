import type { ReactNode } from "react";
import { useTranslation } from "react-i18next";
import { Form } from "react-router";
import type { Problem } from "#app/lib/parse-form.ts";
import { Button } from "./button.tsx";
import { describedBy, fieldId, FieldProblem, inputClasses } from "./field-frame.tsx";

type SearchBarProps = {
	label: string;
	name?: string;
	defaultValue?: string | null;
	problem?: Problem;
	children?: ReactNode;
};

/** A search with filters beside it, sent by GET so that a link keeps it. */
export function SearchBar({ label, name = "q", defaultValue, problem, children }: SearchBarProps) {
	const { t } = useTranslation();
	return (
		<search>
			{/* Fields beside the search have a margin of their own below, which would lift them out of the row. */}
			<Form method="get" className="mb-5 flex flex-wrap items-end gap-3 *:mb-0">
				<div className="min-w-48 flex-1 sm:max-w-sm">
					<label htmlFor={fieldId(name)} className="block font-bold">
						{label}
					</label>
					<FieldProblem name={name} label={label} problem={problem} />
					<input
						type="search"
						id={fieldId(name)}
						name={name}
						defaultValue={defaultValue ?? ""}
						maxLength={200}
						aria-describedby={describedBy(name, null, problem)}
						aria-invalid={problem ? true : undefined}
						className={`${inputClasses(problem)} mt-1.5 w-full`}
					/>
				</div>
				{children}
				<Button kind="secondary">{t("search.submit")}</Button>
			</Form>
		</search>
	);
}

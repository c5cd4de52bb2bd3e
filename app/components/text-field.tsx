import type { HTMLInputAutoCompleteAttribute, InputHTMLAttributes, ReactNode } from "react";
import type { Problem } from "#app/lib/parse-form.ts";
import { classes } from "./classes.ts";
import { describedBy, FieldFrame, FieldHelp, fieldId, FieldProblem, inputClasses, LabelText } from "./field-frame.tsx";

const widths = { short: "w-32", medium: "w-64", full: "w-full" };

type TextFieldProps = {
	label: string;
	name: string;
	defaultValue?: string | number | null;
	help?: ReactNode;
	/** What the answer is called in a sentence about it, where the label is a question. */
	noun?: string;
	problem?: Problem;
	optional?: boolean;
	type?: "text" | "email" | "tel" | "url" | "search" | "date" | "datetime-local" | "time" | "password";
	inputMode?: InputHTMLAttributes<HTMLInputElement>["inputMode"];
	autoComplete?: HTMLInputAutoCompleteAttribute;
	multiline?: boolean;
	rows?: number;
	maxLength?: number;
	/** The language of what is typed, where it is not the page's: the browser checks its spelling by it. */
	lang?: string;
	/** A unit that stands beside the box. */
	suffix?: ReactNode;
	/** What belongs to the field and stands below its box. */
	below?: ReactNode;
	size?: keyof typeof widths;
};

/** One labelled box. Uncontrolled: what was typed comes back through `defaultValue`. */
export function TextField({
	label,
	name,
	help,
	noun,
	problem,
	optional,
	multiline,
	rows,
	suffix,
	below,
	size,
	...rest
}: TextFieldProps) {
	const { defaultValue, type = "text", ...attributes } = rest;
	const shared = {
		...attributes,
		id: fieldId(name),
		name,
		defaultValue: defaultValue ?? "",
		"aria-describedby": describedBy(name, help, problem),
		"aria-invalid": problem ? true : undefined,
		className: classes(inputClasses(problem), widths[size ?? (multiline ? "full" : "medium")]),
	};
	return (
		<FieldFrame problem={problem}>
			<label htmlFor={fieldId(name)} className="font-bold">
				<LabelText label={label} optional={optional} />
			</label>
			<FieldHelp name={name}>{help}</FieldHelp>
			<FieldProblem name={name} label={noun ?? label} problem={problem} />
			<div className="mt-1.5 flex flex-wrap items-center gap-2">
				{multiline ? <textarea {...shared} rows={rows ?? 4} /> : <input {...shared} type={type} />}
				{suffix && <span className="text-quiet">{suffix}</span>}
			</div>
			{below}
		</FieldFrame>
	);
}

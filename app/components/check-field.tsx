import type { ReactNode } from "react";
import type { Problem } from "#app/lib/parse-form.ts";
import { describedBy, FieldFrame, FieldHelp, fieldId, FieldProblem } from "./field-frame.tsx";

type CheckFieldProps = {
	label: string;
	name: string;
	defaultChecked?: boolean;
	problem?: Problem;
	help?: ReactNode;
};

/** One box to tick; sends "on". */
export function CheckField({ label, name, defaultChecked, problem, help }: CheckFieldProps) {
	return (
		<FieldFrame problem={problem}>
			<FieldProblem name={name} label={label} problem={problem} />
			<label htmlFor={fieldId(name)} className="flex min-h-11 max-w-xl items-start gap-3 py-2">
				<input
					type="checkbox"
					id={fieldId(name)}
					name={name}
					defaultChecked={defaultChecked}
					aria-describedby={describedBy(name, help, problem)}
					aria-invalid={problem ? true : undefined}
					className="mt-1 size-5 shrink-0 accent-damson"
				/>
				<span>{label}</span>
			</label>
			<div className="pl-8">
				<FieldHelp name={name}>{help}</FieldHelp>
			</div>
		</FieldFrame>
	);
}

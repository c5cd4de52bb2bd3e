import type { ReactNode } from "react";
import type { Problem } from "#app/lib/parse-form.ts";
import { classes } from "./classes.ts";
import { describedBy, FieldFrame, FieldHelp, fieldId, FieldProblem, inputClasses, LabelText } from "./field-frame.tsx";

/** `group` puts an option of a select under a heading with the others of that group, which stand next to it. */
export type Option = { value: string; label: string; help?: ReactNode; group?: string };
type ChoiceFieldProps = {
	legend: string;
	name: string;
	options: Option[];
	defaultValue?: string | string[] | null;
	help?: ReactNode;
	/** What the answer is called in a sentence about it, where the legend is a question. */
	noun?: string;
	problem?: Problem;
	optional?: boolean;
	kind: "radio" | "checkbox" | "select";
};

/** One or several of a list. The first option carries the field's id, so that the error summary's link lands on it. */
export function ChoiceField(props: ChoiceFieldProps) {
	return props.kind === "select" ? <SelectField {...props} /> : <OptionList {...props} />;
}

function SelectField({ legend, name, options, defaultValue, help, noun, problem, optional }: ChoiceFieldProps) {
	return (
		<FieldFrame problem={problem}>
			<label htmlFor={fieldId(name)} className="font-bold">
				<LabelText label={legend} optional={optional} />
			</label>
			<FieldHelp name={name}>{help}</FieldHelp>
			<FieldProblem name={name} label={noun ?? legend} problem={problem} />
			<select
				id={fieldId(name)}
				name={name}
				defaultValue={chosen(defaultValue)[0] ?? ""}
				aria-describedby={describedBy(name, help, problem)}
				aria-invalid={problem ? true : undefined}
				className={classes(inputClasses(problem), "mt-1.5 block")}
			>
				{groupsOf(options).map(({ group, of }) =>
					group === undefined ? (
						<SelectOptions key="" options={of} />
					) : (
						<optgroup key={group} label={group}>
							<SelectOptions options={of} />
						</optgroup>
					),
				)}
			</select>
		</FieldFrame>
	);
}

function SelectOptions({ options }: { options: Option[] }) {
	return options.map(({ value, label }) => (
		<option key={value} value={value}>
			{label}
		</option>
	));
}

function groupsOf(options: Option[]): { group: string | undefined; of: Option[] }[] {
	return [...new Set(options.map(({ group }) => group))].map((group) => ({
		group,
		of: options.filter((option) => option.group === group),
	}));
}

function OptionList({ legend, name, options, defaultValue, help, noun, problem, optional, kind }: ChoiceFieldProps) {
	const selected = chosen(defaultValue);
	return (
		<FieldFrame problem={problem}>
			<fieldset aria-describedby={describedBy(name, help, problem)}>
				<legend className="font-bold">
					<LabelText label={legend} optional={optional} />
				</legend>
				<FieldHelp name={name}>{help}</FieldHelp>
				<FieldProblem name={name} label={noun ?? legend} problem={problem} />
				<div className="mt-2 grid gap-2">
					{options.map((option, index) => (
						<OptionRow
							key={option.value}
							{...option}
							name={name}
							kind={kind === "checkbox" ? "checkbox" : "radio"}
							id={index === 0 ? fieldId(name) : `${fieldId(name)}-${index + 1}`}
							checked={selected.includes(option.value)}
						/>
					))}
				</div>
			</fieldset>
		</FieldFrame>
	);
}

type OptionRowProps = Option & { id: string; name: string; kind: "radio" | "checkbox"; checked: boolean };

/** The whole row is the target, for gloves and cold fingers. */
function OptionRow({ id, name, kind, value, label, help, checked }: OptionRowProps) {
	return (
		<label
			htmlFor={id}
			className="flex min-h-11 max-w-xl items-start gap-3 rounded-plat border border-field px-3 py-2.5 hover:bg-sheet has-checked:border-damson has-checked:bg-damson-wash has-checked:outline-1 has-checked:outline-damson"
		>
			<input
				type={kind}
				id={id}
				name={name}
				value={value}
				defaultChecked={checked}
				aria-describedby={help ? `${id}-help` : undefined}
				className="mt-0.5 size-5 shrink-0 accent-damson"
			/>
			<span>
				{label}
				{help && (
					<span id={`${id}-help`} className="block text-sm text-quiet">
						{help}
					</span>
				)}
			</span>
		</label>
	);
}

function chosen(value: string | string[] | null | undefined): string[] {
	if (value === null || value === undefined) return [];
	return Array.isArray(value) ? value : [value];
}

import type { ReactNode } from "react";
import { useTranslation } from "react-i18next";
import type { Problem } from "#app/lib/parse-form.ts";
import { classes } from "./classes.ts";
import { useProblemText } from "./problem-text.ts";

export const fieldId = (name: string) => `field-${name}`;

/** Which texts describe a field, for `aria-describedby`. */
export function describedBy(name: string, help: unknown, problem: Problem | undefined): string | undefined {
	return classes(help ? `help-${name}` : "", problem && `problem-${name}`) || undefined;
}

export function FieldHelp({ name, children }: { name: string; children?: ReactNode }) {
	if (!children) return null;
	return (
		<p id={`help-${name}`} className="mt-0.5 max-w-prose text-quiet">
			{children}
		</p>
	);
}

export function FieldProblem({ name, label, problem }: { name: string; label: string; problem?: Problem }) {
	const words = useProblemText();
	if (!problem) return null;
	return (
		<p id={`problem-${name}`} className="mt-1 font-bold text-stop">
			{words(problem, label)}
		</p>
	);
}

/** The label's text, which says "(optional)" instead of marking what is needed by a sign. */
export function LabelText({ label, optional }: { label: ReactNode; optional?: boolean }) {
	const { t } = useTranslation();
	return (
		<>
			{label}
			{optional && <span className="font-normal text-quiet"> {t("field.optional")}</span>}
		</>
	);
}

/** What surrounds every field: a bar at its side when something is to be mended. */
export function FieldFrame({ problem, children }: { problem?: Problem; children: ReactNode }) {
	return (
		<div className={classes("group/field mb-6 min-w-0", problem && "border-l-4 border-stop pl-4")}>{children}</div>
	);
}

export const inputClasses = (problem?: Problem) =>
	classes(
		"min-h-11 max-w-full rounded-plat border bg-paper px-3 py-2 text-ink",
		problem ? "border-2 border-stop" : "border-field",
	);

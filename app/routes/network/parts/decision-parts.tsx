import type { ReactNode } from "react";
import { useTranslation } from "react-i18next";
import { Form } from "react-router";
import { TextField } from "#app/components/text-field.tsx";
import type { FormValues, Problem } from "#app/lib/parse-form.ts";

/** What was sent and came back to be mended. */
export type Sent = { values?: FormValues; problems?: Problem[] };
type SentField = (
	name: string,
	otherwise?: string,
) => {
	name: string;
	label: string;
	defaultValue: string;
	problem: Problem | undefined;
};

/** The fields of a decision with what was typed in them. */
export function sentField(labels: Record<string, string>, { values, problems }: Sent = {}): SentField {
	return (name, otherwise = "") => ({
		name,
		label: labels[name] ?? "",
		defaultValue: typeof values?.[name] === "string" ? values[name] : otherwise,
		problem: problems?.find((problem) => problem.field === name),
	});
}

/** One of the things that can be decided, as a form of its own. */
export function Way({ title, children }: { title: string; children: ReactNode }) {
	return (
		<Form method="post" noValidate className="mt-6 max-w-xl border-t border-rule pt-4">
			<h3 className="mb-2 text-lg font-bold">{title}</h3>
			{children}
		</Form>
	);
}

/** The day and the minute at which something goes out. */
export function MinuteFields({ field, tomorrow }: { field: SentField; tomorrow: string }) {
	const { t } = useTranslation("release");
	return (
		<div className="flex flex-wrap items-end gap-x-8">
			<TextField {...field("publishOn", tomorrow)} type="date" size="medium" />
			<TextField {...field("publishAt", "08:00")} type="time" size="short" help={t("review.zone")} />
		</div>
	);
}

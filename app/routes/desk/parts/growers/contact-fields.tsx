import { useTranslation } from "react-i18next";
import { contactOutcomes, contactWays } from "#app/collect/contacts.schema.ts";
import { ChoiceField } from "#app/components/choice-field.tsx";
import { TextField } from "#app/components/text-field.tsx";
import type { FormValues, Problem } from "#app/lib/parse-form.ts";

/** What the fields of a contact are called where one of them is to be mended. */
export function useContactLabels(): Record<string, string> {
	const { t } = useTranslation("growers");
	return {
		way: t("contact.way"),
		outcome: t("contact.outcome"),
		note: t("contact.note"),
		nextOn: t("contact.nextOn"),
		nextTime: t("contact.nextTime"),
	};
}

/** How, what came of it, and when to try next: the same wherever a contact is noted. */
export function ContactFields({ values, problems }: { values?: FormValues; problems?: Problem[] }) {
	const { t } = useTranslation("growers");
	const labels = useContactLabels();
	const field = (name: string, plain = "") => ({
		name,
		defaultValue: values ? String(values[name] ?? "") : plain,
		problem: problems?.find((problem) => problem.field === name),
	});
	return (
		<>
			<div className="flex flex-wrap gap-x-6">
				<ChoiceField
					{...field("way", "telephone")}
					kind="select"
					legend={labels.way!}
					options={contactWays.map((value) => ({ value, label: t(`contact.ways.${value}`) }))}
				/>
				<ChoiceField
					{...field("outcome", "reached")}
					kind="select"
					legend={labels.outcome!}
					options={contactOutcomes.map((value) => ({ value, label: t(`contact.outcomes.${value}`) }))}
				/>
			</div>
			<TextField {...field("note")} label={labels.note!} multiline rows={2} maxLength={2000} optional />
			<div className="flex flex-wrap gap-x-6">
				<TextField {...field("nextOn")} label={labels.nextOn!} type="date" optional />
				<TextField {...field("nextTime")} label={labels.nextTime!} type="time" size="short" optional />
			</div>
		</>
	);
}

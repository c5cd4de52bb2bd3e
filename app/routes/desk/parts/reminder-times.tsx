import { useTranslation } from "react-i18next";
import { Form } from "react-router";
import { reminderFields, reminderWaves } from "#app/collect/reminder.schema.ts";
import type { Reminder } from "#app/collect/reminders.server.ts";
import type { Survey } from "#app/collect/surveys.server.ts";
import { Button } from "#app/components/button.tsx";
import { Section } from "#app/components/section.tsx";
import { TextField } from "#app/components/text-field.tsx";
import { useFormat } from "#app/i18n/use-format.ts";
import type { FormValues, Problem } from "#app/lib/parse-form.ts";
import { clockWords } from "./clock-words.ts";

type Standing = Reminder & { clock: { on: string; at: string } };
type ReminderTimesProps = { survey: Survey; reminders: Standing[]; values?: FormValues; problems?: Problem[] };

export function reminderLabels(t: (key: string) => string): Record<string, string> {
	const fields = Object.values(reminderFields).flatMap(({ on, at }) => [on, at]);
	return Object.fromEntries(fields.map((name) => [name, t(`mailing.${name}`)]));
}

/** When the two reminders go; each can be moved or called off until it has gone. */
export function ReminderTimes({ survey, reminders, values, problems }: ReminderTimesProps) {
	const { t } = useTranslation("desk");
	const format = useFormat();
	const canSet = survey.state === "open" && survey.mayManage;
	const open = reminderWaves.filter((wave) => !reminders.some((reminder) => reminder.wave === wave && reminder.sentAt));
	return (
		<Section title={t("mailing.reminders")}>
			<p className="mb-4 max-w-prose">
				{t(survey.state === "draft" ? "mailing.beforeOpening" : "mailing.remindersLead")}
			</p>
			{survey.state !== "draft" && (
				<ul className="mb-4 list-disc space-y-1 pl-6">
					{reminderWaves
						.filter((wave) => !canSet || !open.includes(wave))
						.map((wave) => (
							<li key={wave}>
								<Told wave={wave} survey={survey} reminder={reminders.find((reminder) => reminder.wave === wave)} />
							</li>
						))}
				</ul>
			)}
			{canSet && open.length > 0 && (
				<Form method="post" noValidate key={reminders.map(({ clock }) => `${clock.on} ${clock.at}`).join()}>
					{open.map((wave) => (
						<Fields
							key={wave}
							wave={wave}
							standing={reminders.find((reminder) => reminder.wave === wave && !reminder.cancelledAt)}
							clock={clockWords(survey, { t, format })}
							values={values}
							problems={problems}
						/>
					))}
					<Button kind="secondary">{t("mailing.set")}</Button>
				</Form>
			)}
			{survey.state === "open" && !survey.mayManage && <p>{t("mailing.notYours")}</p>}
		</Section>
	);
}

type FieldsProps = { wave: 1 | 2; standing?: Standing; clock: string } & Pick<
	ReminderTimesProps,
	"values" | "problems"
>;

function Fields({ wave, standing, clock, values, problems }: FieldsProps) {
	const { t } = useTranslation("desk");
	const field = (name: string, stands: string | undefined) => ({
		name,
		label: t(`mailing.${name}`),
		defaultValue: values ? String(values[name] ?? "") : (stands ?? ""),
		problem: problems?.find((problem) => problem.field === name),
	});
	const { on, at } = reminderFields[wave];
	return (
		<div className="flex flex-wrap items-end gap-x-8">
			<TextField {...field(on, standing?.clock.on)} type="date" size="medium" />
			<TextField {...field(at, standing?.clock.at)} type="time" size="short" help={clock} />
		</div>
	);
}

/** A reminder that can no longer be set, or not by this viewer. */
function Told({ wave, reminder, survey }: { wave: number; reminder?: Standing; survey: Survey }) {
	const { t } = useTranslation("desk");
	const format = useFormat();
	const state = !reminder
		? "none"
		: reminder.sentAt
			? "sent"
			: reminder.cancelledAt || survey.state === "closed"
				? "none"
				: "set";
	const at = reminder?.sentAt ?? reminder?.remindAt;
	return t(`mailing.reminder.${state}`, {
		wave: format.number(wave),
		moment: at ? format.moment(at, survey.timeZone) : "",
	});
}

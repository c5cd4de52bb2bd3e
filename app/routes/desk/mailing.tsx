import { useTranslation } from "react-i18next";
import { data, href, Link, redirect } from "react-router";
import type { Route } from "./+types/mailing";
import { requireAssociate } from "#app/auth/guard.server.ts";
import { sessionContext } from "#app/auth/session.server.ts";
import { countMailsByKind } from "#app/collect/mail-counts.server.ts";
import { ReminderForm } from "#app/collect/reminder.schema.ts";
import { listReminders, setReminders } from "#app/collect/reminders.server.ts";
import { wallClockOf } from "#app/collect/survey-closing.ts";
import { findRealSurvey } from "#app/collect/surveys.server.ts";
import { ErrorSummary } from "#app/components/error-summary.tsx";
import { Notice } from "#app/components/notice.tsx";
import { Section } from "#app/components/section.tsx";
import { lookAgain } from "#app/lib/look-again.ts";
import { parseForm } from "#app/lib/parse-form.ts";
import { refusal } from "#app/lib/refusal.ts";
import { letterKinds } from "#app/mail/templates.ts";
import { MailCounts } from "./parts/mail-counts.tsx";
import { reminderLabels, ReminderTimes } from "./parts/reminder-times.tsx";

export async function loader({ context, params }: Route.LoaderArgs) {
	const desk = requireAssociate(context);
	const found = await desk.transaction(async (trx) => {
		const survey = await findRealSurvey(trx, desk.viewer, params.surveyId);
		return (
			survey && {
				survey,
				counts: await countMailsByKind(trx, desk.viewer, params.surveyId),
				reminders: await listReminders(trx, desk.viewer, params.surveyId),
			}
		);
	});
	if (!found) throw refusal("survey_not_found");
	const { survey, counts, reminders } = found;
	return {
		survey,
		counts,
		reminders: reminders.map((reminder) => ({ ...reminder, clock: wallClockOf(reminder.remindAt, survey.timeZone) })),
		kinds: letterKinds,
	};
}

/** Sets when the reminders go. */
export async function action({ context, params, request }: Route.ActionArgs) {
	const desk = requireAssociate(context);
	const form = parseForm(ReminderForm, await request.formData());
	if (!form.ok) return data({ refused: null, values: form.values, problems: form.problems }, { status: 400 });

	const outcome = await desk.transaction(async (trx) => {
		if (!(await findRealSurvey(trx, desk.viewer, params.surveyId))) return "not_found" as const;
		return setReminders(trx, desk.viewer, params.surveyId, form.value);
	});
	if (outcome === "not_found") throw refusal("survey_not_found");
	const { values } = form;
	if (typeof outcome === "object") return data({ refused: null, values, problems: outcome.problems }, { status: 400 });
	if (outcome !== "set") return data({ refused: outcome, values, problems: [] }, { status: 409 });
	context.get(sessionContext).flash("toast", { key: "desk:mailing.toast.set" });
	return redirect(href("/desk/surveys/:surveyId/mailing", params), 303);
}

export const shouldRevalidate = lookAgain;

export default function Mailing({ loaderData, actionData }: Route.ComponentProps) {
	const { t } = useTranslation("desk");
	const { survey, counts, reminders, kinds } = loaderData;
	return (
		<>
			<ErrorSummary problems={actionData?.problems} labels={reminderLabels(t)} />
			{actionData?.refused && <Notice tone="attention">{t(`survey.refused.${actionData.refused}`)}</Notice>}
			<MailCounts survey={survey} counts={counts} />
			<ReminderTimes
				survey={survey}
				reminders={reminders}
				values={actionData?.values}
				problems={actionData?.problems}
			/>
			<Section title={t("mailing.preview")}>
				<p className="mb-3 max-w-prose">{t("mailing.previewLead")}</p>
				<ul className="list-disc space-y-1 pl-6">
					{kinds.map((kind) => (
						<li key={kind}>
							<Link to={href("/desk/surveys/:surveyId/mailing/:kind", { surveyId: survey.surveyId, kind })}>
								{t(`mailing.kind.${kind}`)}
							</Link>
						</li>
					))}
				</ul>
			</Section>
		</>
	);
}

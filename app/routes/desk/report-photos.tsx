import { useTranslation } from "react-i18next";
import { data, Form, href, Link, redirect, useNavigation } from "react-router";
import type { Route } from "./+types/report-photos";
import { requireAssociate } from "#app/auth/guard.server.ts";
import { sessionContext } from "#app/auth/session.server.ts";
import { Button } from "#app/components/button.tsx";
import { CheckField } from "#app/components/check-field.tsx";
import { EmptyState } from "#app/components/empty-state.tsx";
import { ErrorSummary } from "#app/components/error-summary.tsx";
import { FieldFrame, FieldHelp, fieldId, FieldProblem } from "#app/components/field-frame.tsx";
import { fileButton } from "#app/components/file-button.ts";
import { Notice } from "#app/components/notice.tsx";
import { Page } from "#app/components/page.tsx";
import { Section } from "#app/components/section.tsx";
import { TextField } from "#app/components/text-field.tsx";
import { wordsIn } from "#app/i18n/language.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import { type Problem } from "#app/lib/parse-form.ts";
import { refusal } from "#app/lib/refusal.ts";
import { addReportPhoto, listReportPhotos } from "#app/publish/drafting/report-photos.server.ts";
import { findReport } from "#app/publish/drafting/reports.server.ts";
import { readReportPhoto } from "./parts/report-photo-form.server.ts";
import { usePhotoName } from "./parts/report-photo-name.ts";

export async function loader({ context, params }: Route.LoaderArgs) {
	const desk = requireAssociate(context);
	const found = await desk.transaction(async (trx) => {
		const report = await findReport(trx, desk.viewer, params.reportId);
		return report && { report, photos: await listReportPhotos(trx, desk.viewer, report.reportId) };
	});
	if (!found) throw refusal("report_not_found");
	const { reportId, state, content } = found.report;
	return { report: { reportId, state, title: content.title }, photos: found.photos };
}

export async function action({ context, params, request }: Route.ActionArgs) {
	const desk = requireAssociate(context);
	const sent = await readReportPhoto(request);
	if (!sent.ok) return data({ values: sent.values, problems: sent.problems }, { status: 400 });

	const outcome = await desk.transaction((trx) =>
		addReportPhoto(trx, desk.viewer, params.reportId, sent.photo, sent.consent),
	);
	if (outcome === "not_found") throw refusal("report_not_found");
	const key = outcome === "added" ? "report:photos.added" : "public:report_editor.notDraft";
	context.get(sessionContext).flash("toast", { key });
	return redirect(href("/desk/reports/:reportId/photos", { reportId: params.reportId }), 303);
}

export default function ReportPhotos({ loaderData: { report, photos }, actionData }: Route.ComponentProps) {
	const { t, i18n } = useTranslation("report");
	const photoName = usePhotoName();
	const format = useFormat();
	const title = wordsIn(report.title, i18n.language) || t("public:report_editor.untitled");
	return (
		<Page title={t("photos.title", { title })} lead={t("photos.lead")}>
			<p className="mb-4">
				<Link to={href("/desk/reports/:reportId", { reportId: report.reportId })}>{t("edits.back")}</Link>
			</p>
			<ErrorSummary problems={actionData?.problems} labels={useLabels()} />
			{photos.length === 0 ? (
				<EmptyState title={t("photos.noneTitle")}>{t("photos.none")}</EmptyState>
			) : (
				<ul className="flex list-none flex-wrap gap-6">
					{photos.map((photo, index) => (
						<li key={photo.photoId} className="w-56 text-sm">
							{photo.takenAway ? (
								<p className="flex h-40 w-56 items-center border border-line px-4 text-quiet">
									{t("photos.goneLabel", { date: format.dayOf(photo.takenAway.at) })}
								</p>
							) : (
								<img
									src={href("/desk/report-photos/:photoId", { photoId: photo.photoId })}
									alt=""
									className="h-40 w-56 border border-line object-cover"
								/>
							)}
							<p>{photoName(photo, index)}</p>
							{!photo.takenAway && (
								<Link
									to={href("/desk/reports/:reportId/photos/:photoId", {
										reportId: report.reportId,
										photoId: photo.photoId,
									})}
									className="inline-flex min-h-11 items-center"
								>
									{t("photos.away")}
									<span className="sr-only"> {photoName(photo, index)}</span>
								</Link>
							)}
						</li>
					))}
				</ul>
			)}
			{report.state === "draft" ? (
				<PhotoForm key={photos.length} sent={actionData} />
			) : (
				<Notice tone="info">{t("photos.draftOnly")}</Notice>
			)}
		</Page>
	);
}

function useLabels(): Record<string, string> {
	const { t } = useTranslation("report");
	return {
		photo: t("photos.file"),
		consentOf: t("photos.consentOf"),
		consentOn: t("photos.consentOn"),
		consentGiven: t("photos.consentGiven"),
	};
}

type Sent = { values: Record<string, unknown>; problems: Problem[] } | undefined;

/** A photo with the consent that it is shown with. A browser cannot keep a chosen file: after a problem it is chosen again. */
function PhotoForm({ sent }: { sent: Sent }) {
	const { t } = useTranslation("report");
	const labels = useLabels();
	const busy = useNavigation().state === "submitting";
	const problemOf = (name: string) => sent?.problems.find(({ field }) => field === name);
	const text = (name: "consentOf" | "consentOn") => ({
		name,
		label: labels[name]!,
		defaultValue: typeof sent?.values[name] === "string" ? sent.values[name] : "",
		problem: problemOf(name),
	});
	const photo = problemOf("photo");
	return (
		<Section title={t("photos.addTitle")}>
			<Form method="post" encType="multipart/form-data" noValidate className="max-w-xl">
				<FieldFrame problem={photo}>
					<label htmlFor={fieldId("photo")} className="block font-bold">
						{labels.photo}
					</label>
					<FieldHelp name="photo">{t(sent && !photo ? "photos.fileAgain" : "photos.fileHelp")}</FieldHelp>
					<FieldProblem name="photo" label={labels.photo!} problem={photo} />
					<input
						id={fieldId("photo")}
						name="photo"
						type="file"
						accept="image/*"
						aria-describedby={photo ? "help-photo problem-photo" : "help-photo"}
						aria-invalid={photo ? true : undefined}
						className={`mt-2 block min-h-11 max-w-full ${fileButton}`}
					/>
				</FieldFrame>
				<TextField {...text("consentOf")} help={t("photos.consentOfHelp")} size="full" />
				<TextField {...text("consentOn")} type="date" size="medium" />
				<CheckField
					name="consentGiven"
					label={labels.consentGiven!}
					defaultChecked={sent?.values.consentGiven === "on"}
					problem={problemOf("consentGiven")}
				/>
				<Button busy={busy}>{t("photos.add")}</Button>
			</Form>
		</Section>
	);
}

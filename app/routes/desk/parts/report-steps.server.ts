import { data, href } from "react-router";
import type { Access } from "#app/auth/guard.server.ts";
import type { Associate, Coordinator } from "#app/auth/viewer.ts";
import { parseForm } from "#app/lib/parse-form.ts";
import { refusal } from "#app/lib/refusal.ts";
import { CommentForm } from "#app/publish/drafting/decision.schema.ts";
import { applyEdit, EditorForm } from "#app/publish/drafting/editing.ts";
import { addComment, resolveComment } from "#app/publish/drafting/report-comments.server.ts";
import { listReportPhotos } from "#app/publish/drafting/report-photos.server.ts";
import { findReport, saveReport, submitReport } from "#app/publish/drafting/reports.server.ts";
import { listCrops, listMeasures } from "#app/publish/releases.server.ts";
import { missingWords, tooLongWords, withOwnPhotos } from "#app/publish/report.ts";

/** Saves what the editor sent and does its button's act. A page that is to be shown next comes back as an address. */
export async function takeEdit(desk: Access<Associate>, reportId: string, sent: FormData) {
	const form = parseForm(EditorForm, sent);
	// The page's own controls cannot make such a form: a forged or broken one, whose texts cannot be put back in place.
	if (!form.ok) throw refusal("form_not_understood");
	const report = await desk.transaction((trx) => findReport(trx, desk.viewer, reportId));
	if (!report) throw refusal("report_not_found");
	const [measures, crops] = await Promise.all([listMeasures(report.releaseId), listCrops(report.releaseId)]);
	const first = { measure: measures[0]?.key ?? "", crop: crops[0] ?? "all", area: "network" };
	const photos = await desk.transaction((trx) => listReportPhotos(trx, desk.viewer, reportId));
	const edited = applyEdit(form.value, first);
	const content = withOwnPhotos(
		edited.content,
		new Set(photos.filter(({ takenAway }) => !takenAway).map(({ photoId }) => photoId)),
	);
	const { at } = edited;
	const { verb, blockId } = form.value.intent;
	const correction = report.version > 1 ? (form.value.correction ?? { en: "", es: "" }) : null;
	const edit = verb === "overwrite" ? Number(blockId) || 0 : form.value.edit;
	const back = { content, correction, edit, conflict: null, autosaved: verb === "autosave" };
	const tooLong = tooLongWords(content);
	if (tooLong.length > 0) return data({ ...back, problems: tooLong }, { status: 400 });

	const { saved, submitted } = await desk.transaction(async (trx) => {
		const outcome = await saveReport(trx, desk.viewer, reportId, edit, content, correction);
		const handIn = outcome.outcome === "saved" && verb === "submit";
		return { saved: outcome, submitted: handIn ? await submitReport(trx, desk.viewer, reportId) : null };
	});
	if (saved.outcome === "conflict") return data({ ...back, problems: [], conflict: saved.edit }, { status: 409 });
	if (saved.outcome === "saved" && submitted === "incomplete") {
		const problems = missingWords(content, correction);
		return data({ ...back, edit: saved.edit, problems }, { status: 400 });
	}
	if (verb === "autosave" && saved.outcome === "saved") return data({ ...back, edit: saved.edit, problems: [] });
	const address = href("/desk/reports/:reportId", { reportId });
	const toast = saved.outcome === "not_draft" ? "notDraft" : submitted ? "submittedNow" : at ? null : "savedNow";
	return { address: at ? `${address}#block-${at}` : address, toast };
}

/** Takes a comment, or marks one as dealt with, for author and second person alike. */
export async function takeComment(access: Access<Associate> | Access<Coordinator>, reportId: string, sent: FormData) {
	const form = parseForm(CommentForm, sent);
	if (!form.ok) return data({ values: form.values, problems: form.problems }, { status: 400 });
	const { viewer } = access;
	const outcome = await access.transaction((trx) =>
		form.value.intent === "comment"
			? addComment(trx, viewer, reportId, { body: form.value.comment, blockId: form.value.block })
			: resolveComment(trx, viewer, reportId, form.value.commentId),
	);
	if (outcome === "not_found") throw refusal("report_not_found");
	return { values: {}, problems: [] };
}

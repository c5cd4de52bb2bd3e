import { data } from "react-router";
import type { Access } from "#app/auth/guard.server.ts";
import type { Associate, Coordinator } from "#app/auth/viewer.ts";
import { takeReportPhotoAway } from "#app/jobs/publish-report.server.ts";
import { parseForm } from "#app/lib/parse-form.ts";
import { refusal } from "#app/lib/refusal.ts";
import { PhotoTakeAway } from "#app/publish/drafting/photo.schema.ts";
import { listReportPhotos } from "#app/publish/drafting/report-photos.server.ts";

type Writer = Access<Associate> | Access<Coordinator>;
type Params = { reportId: string; photoId: string };

/** A photo that can be taken away: one that is gone already is not found. */
export async function findPhotoToTakeAway({ transaction, viewer }: Writer, { reportId, photoId }: Params) {
	const photos = await transaction((trx) => listReportPhotos(trx, viewer, reportId));
	const photo = photos.find((each) => each.photoId === photoId && !each.takenAway);
	if (!photo) throw refusal("report_not_found");
	return { reportId, photo };
}

/** Takes a photo away for the reason that was sent. @returns what is to be mended in the form; null when it is done. */
export async function takeAwayAsSent({ transaction, viewer }: Writer, { reportId, photoId }: Params, sent: FormData) {
	const form = parseForm(PhotoTakeAway, sent);
	if (!form.ok) return data({ problems: form.problems }, { status: 400 });
	const { because } = form.value;
	const outcome = await transaction((trx) => takeReportPhotoAway(trx, viewer, reportId, photoId, because));
	if (outcome === "not_found") throw refusal("report_not_found");
	return null;
}

import { href, redirect } from "react-router";
import type { Route } from "./+types/report-photo-away";
import { requireAssociate } from "#app/auth/guard.server.ts";
import { sessionContext } from "#app/auth/session.server.ts";
import { findPhotoToTakeAway, takeAwayAsSent } from "./parts/photo-away.server.ts";
import { PhotoAwayPage } from "./parts/photo-away-page.tsx";

const backTo = (reportId: string) => href("/desk/reports/:reportId/photos", { reportId });

export async function loader({ context, params }: Route.LoaderArgs) {
	const desk = requireAssociate(context);
	return findPhotoToTakeAway(desk, params);
}

export async function action({ context, params, request }: Route.ActionArgs) {
	const desk = requireAssociate(context);
	const problems = await takeAwayAsSent(desk, params, await request.formData());
	if (problems) return problems;
	context.get(sessionContext).flash("toast", { key: "report:photos.takeAway.done" });
	return redirect(backTo(params.reportId), 303);
}

export default function DeskPhotoAway({ loaderData: { reportId, photo }, actionData }: Route.ComponentProps) {
	const address = href("/desk/report-photos/:photoId", { photoId: photo.photoId });
	return <PhotoAwayPage photo={photo} address={address} back={backTo(reportId)} problems={actionData?.problems} />;
}

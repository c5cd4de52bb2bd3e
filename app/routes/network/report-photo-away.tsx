import { href, redirect } from "react-router";
import type { Route } from "./+types/report-photo-away";
import { requireCoordinator } from "#app/auth/guard.server.ts";
import { sessionContext } from "#app/auth/session.server.ts";
import { findPhotoToTakeAway, takeAwayAsSent } from "#app/routes/desk/parts/photo-away.server.ts";
import { PhotoAwayPage } from "#app/routes/desk/parts/photo-away-page.tsx";

const backTo = (reportId: string) => href("/network/reports/:reportId", { reportId });

export async function loader({ context, params }: Route.LoaderArgs) {
	const network = requireCoordinator(context);
	return findPhotoToTakeAway(network, params);
}

export async function action({ context, params, request }: Route.ActionArgs) {
	const network = requireCoordinator(context);
	const problems = await takeAwayAsSent(network, params, await request.formData());
	if (problems) return problems;
	context.get(sessionContext).flash("toast", { key: "report:photos.takeAway.done" });
	return redirect(backTo(params.reportId), 303);
}

export default function NetworkPhotoAway({ loaderData: { reportId, photo }, actionData }: Route.ComponentProps) {
	const address = href("/network/report-photos/:photoId", { photoId: photo.photoId });
	return <PhotoAwayPage photo={photo} address={address} back={backTo(reportId)} problems={actionData?.problems} />;
}

import { href, redirect } from "react-router";
import type { Route } from "./+types/follow";
import { requireResearcher } from "#app/auth/guard.server.ts";
import { FollowForm, followSeries, unfollowSeries } from "#app/auth/release-follows.server.ts";
import { sessionContext } from "#app/auth/session.server.ts";
import { parseForm } from "#app/lib/parse-form.ts";
import { refusal } from "#app/lib/refusal.ts";
import { listEditions } from "#app/publish/releases.server.ts";

/** Follows a release or ends that, from its page or from the data room, and goes back there. */
export async function action({ context, request }: Route.ActionArgs) {
	const researcher = requireResearcher(context);
	const form = parseForm(FollowForm, await request.formData());
	if (!form.ok) throw refusal("release_not_found");
	const { seriesId, intent, release } = form.value;
	if (intent === "follow") {
		if ((await listEditions(seriesId)).length === 0) throw refusal("release_not_found");
		await followSeries(researcher, seriesId);
	} else await unfollowSeries(researcher, seriesId);
	context.get(sessionContext).flash("toast", {
		key: intent === "follow" ? "dataroom:follow.toast.followed" : "dataroom:follow.toast.unfollowed",
	});
	const back = release ? `${href("/data/:release", { release: `${release}` })}#follow` : href("/dataroom");
	return redirect(back, 303);
}

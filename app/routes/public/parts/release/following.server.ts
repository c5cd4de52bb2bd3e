import type { RouterContextProvider } from "react-router";
import { listFollowed } from "#app/auth/release-follows.server.ts";
import { visitorContext } from "#app/auth/visitor.server.ts";
import type { Release } from "#app/publish/release.ts";

/** Whether the visitor follows a release, or what is missing to do so. */
export type Following = "signed_out" | "no_researcher" | "no_address" | "no" | "yes";

export async function followingOf(
	context: Readonly<RouterContextProvider>,
	{ seriesId }: Pick<Release, "seriesId">,
): Promise<Following> {
	const { person, grants } = context.get(visitorContext);
	if (!person) return "signed_out";
	if (!grants.researcher) return "no_researcher";
	if ((await listFollowed(person)).includes(seriesId)) return "yes";
	return person.email ? "no" : "no_address";
}

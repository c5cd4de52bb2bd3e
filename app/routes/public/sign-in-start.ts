import { redirect } from "react-router";
import type { Route } from "./+types/sign-in-start";
import { rememberNext } from "#app/auth/next-page.server.ts";
import { failureOf, startSignIn } from "#app/auth/provider.server.ts";
import { log } from "#app/lib/log.server.ts";
import { sameSitePath } from "#app/lib/same-site-path.ts";

/** By GET, since the content policy lets no form lead on to another site. It changes nothing but two cookies. */
export async function loader({ request }: Route.LoaderArgs) {
	const next = sameSitePath(new URL(request.url).searchParams.get("next"), "/me");
	try {
		const response = await startSignIn(request);
		const headers = new Headers(response.headers);
		headers.append("set-cookie", await rememberNext(next));
		return new Response(null, { status: 302, headers });
	} catch (error) {
		log.error({ err: error }, "the sign-in provider did not answer");
		return redirect(`/sign-in?problem=${failureOf(error)}&next=${encodeURIComponent(next)}`, 303);
	}
}

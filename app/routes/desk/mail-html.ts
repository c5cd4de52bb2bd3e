import type { Route } from "./+types/mail-html";
import { requireAssociate } from "#app/auth/guard.server.ts";
import { readSample } from "./parts/sample.server.ts";

// A letter has its looks inline, which pages of the site may not: so it stands in a frame with rules of its own.
const policy =
	"sandbox; default-src 'none'; style-src 'unsafe-inline'; base-uri 'none'; form-action 'none'; frame-ancestors 'self'";

/** A mail as HTML, for the frame of its preview. */
export async function loader({ context, params, request }: Route.LoaderArgs) {
	const desk = requireAssociate(context);
	const { language, mail } = await readSample(desk, request, params);
	return new Response(mail.html, {
		headers: {
			"content-type": "text/html; charset=utf-8",
			"content-language": language,
			"content-security-policy": policy,
		},
	});
}

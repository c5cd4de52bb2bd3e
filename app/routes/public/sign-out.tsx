import { useTranslation } from "react-i18next";
import { redirect } from "react-router";
import type { Route } from "./+types/sign-out";
import { sessionContext } from "#app/auth/session.server.ts";
import { visitorContext } from "#app/auth/visitor.server.ts";
import { Button } from "#app/components/button.tsx";
import { Page } from "#app/components/page.tsx";
import { sameSitePath } from "#app/lib/same-site-path.ts";

export function loader({ context }: Route.LoaderArgs) {
	const { person, link } = context.get(visitorContext);
	return { open: person !== null || link !== null };
}

/** Ends the session on the server, whether a person's or a personal link's; twice is harmless. */
export async function action({ context, request }: Route.ActionArgs) {
	const form = await request.formData();
	const session = context.get(sessionContext);
	session.unset("personId");
	session.unset("personalLinkId");
	// What a browser kept of a survey on this device goes too.
	return redirect(sameSitePath(form.get("next"), "/"), { status: 303, headers: { "clear-site-data": '"storage"' } });
}

export default function SignOut({ loaderData }: Route.ComponentProps) {
	const { t } = useTranslation();
	return (
		<Page title={t("signOut.title")} lead={t(loaderData.open ? "signOut.lead" : "signOut.signedOut")} width="narrow">
			{loaderData.open && (
				<form method="post" action="/sign-out">
					<Button>{t("nav.signOut")}</Button>
				</form>
			)}
		</Page>
	);
}

import { redirect } from "react-router";
import { z } from "zod";
import type { Route } from "./+types/language";
import { setLanguage } from "#app/auth/accounts.server.ts";
import { scopedTransaction } from "#app/auth/scope.server.ts";
import { visitorContext } from "#app/auth/visitor.server.ts";
import { languages } from "#app/i18n/language.ts";
import { languageCookie } from "#app/i18n/middleware.server.ts";
import { sameSitePath } from "#app/lib/same-site-path.ts";

const LanguageForm = z.object({ language: z.enum(languages), returnTo: z.unknown() });

/** An address that a reload can lead to; there is nothing to see. */
export function loader() {
	return redirect("/", 303);
}

export async function action({ context, request }: Route.ActionArgs) {
	const { person } = context.get(visitorContext);
	const form = LanguageForm.safeParse(Object.fromEntries(await request.formData()));
	// A language that is not ours changes nothing; there is no field to mend.
	if (!form.success) return redirect("/", 303);
	const { language, returnTo } = form.data;
	if (person) await scopedTransaction({ kind: "none" }, (trx) => setLanguage(trx, person.personId, language));
	return redirect(sameSitePath(returnTo), {
		status: 303,
		headers: { "set-cookie": await languageCookie.serialize(language) },
	});
}

import { useTranslation } from "react-i18next";
import { Form, href } from "react-router";
import type { Route } from "./+types/confirm";
import { scopedTransaction } from "#app/auth/scope.server.ts";
import { Button, ButtonLink } from "#app/components/button.tsx";
import { Page } from "#app/components/page.tsx";
import { speakLikeMail } from "#app/i18n/middleware.server.ts";
import { refusal } from "#app/lib/refusal.ts";
import { idOfToken } from "#app/mail/id-token.server.ts";
import { confirmRequest, findRequest } from "#app/publish/readership/subscribers.server.ts";

const none = { kind: "none" } as const;

// Without scripts the answer to the button is made in the request that pressed it, and so in the language of the mail.
export const handle = { bare: true };

/** Looks only, for mail scanners open links too: the button confirms. */
export async function loader({ context, params, request }: Route.LoaderArgs) {
	const requestId = idOfToken("confirm subscription", params.token);
	const asked = requestId && (await scopedTransaction(none, (trx) => findRequest(trx, requestId)));
	if (asked) await speakLikeMail(context, request, asked.language);
	// A request that was confirmed is gone; its link shows the same as one that is too old.
	return { waiting: Boolean(asked) };
}

export async function action({ context, params, request }: Route.ActionArgs) {
	const requestId = idOfToken("confirm subscription", params.token);
	if (!requestId) throw refusal("stop_link_not_valid");
	const asked = await scopedTransaction(none, (trx) => findRequest(trx, requestId));
	if (asked) await speakLikeMail(context, request, asked.language);
	const outcome = await scopedTransaction(none, (trx) => confirmRequest(trx, requestId));
	return { confirmed: outcome === "confirmed" };
}

export default function Confirm({ loaderData, actionData }: Route.ComponentProps) {
	const { t } = useTranslation("report");
	const state = actionData?.confirmed ? "done" : loaderData.waiting ? "ask" : "over";
	return (
		<Page title={t(`confirm.${state}.title`)} lead={t(`confirm.${state}.lead`)} width="narrow">
			{state === "ask" && (
				<Form method="post">
					<Button>{t("confirm.button")}</Button>
				</Form>
			)}
			{state === "over" && (
				<ButtonLink to={href("/subscribe")} kind="secondary">
					{t("confirm.again")}
				</ButtonLink>
			)}
			{state === "done" && (
				<ButtonLink to={href("/reports")} kind="secondary">
					{t("confirm.toReports")}
				</ButtonLink>
			)}
		</Page>
	);
}

import { useTranslation } from "react-i18next";
import { Form, href, Link } from "react-router";
import type { Route } from "./+types/unsubscribe";
import { scopedTransaction } from "#app/auth/scope.server.ts";
import { Button } from "#app/components/button.tsx";
import { Page } from "#app/components/page.tsx";
import { speakLikeMail } from "#app/i18n/middleware.server.ts";
import { refusal } from "#app/lib/refusal.ts";
import { idOfToken } from "#app/mail/id-token.server.ts";
import { findSubscriber, removeSubscriber } from "#app/publish/readership/subscribers.server.ts";

const none = { kind: "none" } as const;

// Without scripts the answer to the button is made in the request that pressed it, and so in the language of the mail.
export const handle = { bare: true };

/** Looks only, for mail scanners open links too. */
export async function loader({ context, params, request }: Route.LoaderArgs) {
	const subscriberId = idOfToken("unsubscribe", params.token);
	if (!subscriberId) throw refusal("stop_link_not_valid");
	const subscriber = await scopedTransaction(none, (trx) => findSubscriber(trx, subscriberId));
	if (subscriber) await speakLikeMail(context, request, subscriber.language);
	return { subscribed: Boolean(subscriber) };
}

/** One press, also the mail program's own (RFC 8058), which posts no step of ours. The address is forgotten at once. */
export async function action({ context, params, request }: Route.ActionArgs) {
	const subscriberId = idOfToken("unsubscribe", params.token);
	if (!subscriberId) throw refusal("stop_link_not_valid");
	const subscriber = await scopedTransaction(none, (trx) => findSubscriber(trx, subscriberId));
	if (subscriber) await speakLikeMail(context, request, subscriber.language);
	await scopedTransaction(none, (trx) => removeSubscriber(trx, subscriberId));
	return { done: true };
}

export default function Unsubscribe({ loaderData }: Route.ComponentProps) {
	const { t } = useTranslation("report");
	const state = loaderData.subscribed ? "ask" : "done";
	return (
		<Page title={t(`unsubscribe.${state}.title`)} lead={t(`unsubscribe.${state}.lead`)} width="narrow">
			{loaderData.subscribed ? (
				<Form method="post">
					<Button>{t("unsubscribe.button")}</Button>
				</Form>
			) : (
				<p>
					<Link to={href("/subscribe")}>{t("unsubscribe.again")}</Link>
				</p>
			)}
		</Page>
	);
}

import { useTranslation } from "react-i18next";
import { Form, href, Link } from "react-router";
import type { Route } from "./+types/unfollow";
import { endFollow, findFollow } from "#app/auth/release-follows.server.ts";
import { scopedTransaction } from "#app/auth/scope.server.ts";
import { Button } from "#app/components/button.tsx";
import { Page } from "#app/components/page.tsx";
import { speakLikeMail } from "#app/i18n/middleware.server.ts";
import { refusal } from "#app/lib/refusal.ts";
import { idOfToken } from "#app/mail/id-token.server.ts";

const none = { kind: "none" } as const;

// Without scripts the answer to the button is made in the request that pressed it, and so in the language of the mail.
export const handle = { bare: true };

/** Looks only, for mail scanners open links too. */
export async function loader({ context, params, request }: Route.LoaderArgs) {
	const followId = idOfToken("unfollow", params.token);
	if (!followId) throw refusal("stop_link_not_valid");
	const follow = await scopedTransaction(none, (trx) => findFollow(trx, followId));
	if (follow) await speakLikeMail(context, request, follow.language);
	return { following: Boolean(follow) };
}

/** One press, also the mail program's own (RFC 8058), which posts no step of ours. */
export async function action({ context, params, request }: Route.ActionArgs) {
	const followId = idOfToken("unfollow", params.token);
	if (!followId) throw refusal("stop_link_not_valid");
	const follow = await scopedTransaction(none, (trx) => findFollow(trx, followId));
	if (follow) await speakLikeMail(context, request, follow.language);
	await scopedTransaction(none, (trx) => endFollow(trx, followId));
	return { done: true };
}

export default function Unfollow({ loaderData }: Route.ComponentProps) {
	const { t } = useTranslation("dataroom");
	const state = loaderData.following ? "ask" : "done";
	return (
		<Page title={t(`unfollow.${state}.title`)} lead={t(`unfollow.${state}.lead`)} width="narrow">
			{loaderData.following ? (
				<Form method="post">
					<Button>{t("unfollow.button")}</Button>
				</Form>
			) : (
				<p>
					<Link to={href("/data")}>{t("unfollow.again")}</Link>
				</p>
			)}
		</Page>
	);
}

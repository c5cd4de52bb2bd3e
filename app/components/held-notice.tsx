import { type ReactNode, useEffect } from "react";
import { useTranslation } from "react-i18next";
import { useLocation } from "react-router";
import { forgetHeldPost, type HeldPost } from "#app/lib/held-post.ts";
import { sentByParam } from "#app/lib/sent-by.ts";
import type { Refusal } from "#app/lib/refusal.ts";
import { Button, ButtonLink } from "./button.tsx";
import { NotDone } from "./notice.tsx";
import { Page } from "./page.tsx";
import { useHeldPost } from "./use-held-post.ts";

/** Why it was not taken; without scripts also because a personal link is not open any more. */
export type HeldAs = HeldPost["why"] | "link";

/** Above a page that stays with what is typed on it, as nobody is signed in who could send it. */
export function HeldNotice() {
	const { t } = useTranslation();
	const { key } = useLocation();
	const held = useHeldPost();
	useEffect(forgetHeldPost, [key]);
	if (!held) return null;
	const { why, again } = held;
	// Where a page is kept by itself, whoever is typing goes on typing.
	return (
		<NotDone answer={again} tone="attention" title={t(`held.${why}.title`)}>
			<p className="mb-4">{t(`held.${why}.typed`)}</p>
			<Steps why={why}>
				{again && (
					<Button type="button" kind="secondary" onClick={again}>
						{t("held.again")}
					</Button>
				)}
			</Steps>
		</NotDone>
	);
}

/** The same without scripts: a page that holds what was sent, and sends it again. */
export function HeldForm({ why, posted }: { why: HeldAs; posted: NonNullable<Refusal["posted"]> }) {
	const { t } = useTranslation();
	const { pathname, search } = useLocation();
	if (posted === "lost")
		return (
			<Page title={t(`held.${why}.title`)} width="narrow" lead={t(`held.${why}.lost`)}>
				<Steps why={why} />
			</Page>
		);
	const query = new URLSearchParams(search);
	query.set(sentByParam, posted.holder);
	return (
		<Page title={t(`held.${why}.title`)} width="narrow" lead={t(`held.${why}.posted`)}>
			<form method="post" action={`${pathname}?${query}`}>
				{posted.fields.map(({ place, name, value }) => (
					<input key={place} type="hidden" name={name} value={value} />
				))}
				<Steps why={why}>
					<Button kind={why === "link" ? "primary" : "secondary"}>{t("held.again")}</Button>
				</Steps>
			</form>
		</Page>
	);
}

/** The way to sign in, first; after a personal link it is the way of the few who came without one. */
function Steps({ why, children }: { why: HeldAs; children?: ReactNode }) {
	const { t } = useTranslation();
	const cameByLink = why === "link";
	return (
		<div className="flex flex-wrap gap-3">
			{cameByLink && children}
			<ButtonLink
				to={why === "other" ? "/sign-out" : "/sign-in"}
				target="_blank"
				kind={cameByLink ? "secondary" : "primary"}
			>
				{t(`held.${why}.link`)}
			</ButtonLink>
			{!cameByLink && children}
		</div>
	);
}

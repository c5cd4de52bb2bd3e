import { useTranslation } from "react-i18next";
import { data, Form } from "react-router";
import type { Route } from "./+types/invitation";
import { findInvitation } from "#app/auth/accepting.server.ts";
import { keepInvitation } from "#app/auth/kept-invitation.server.ts";
import { countWrongLink } from "#app/auth/link-tries.server.ts";
import { visitorContext } from "#app/auth/visitor.server.ts";
import { Button, ButtonLink } from "#app/components/button.tsx";
import { DescriptionList } from "#app/components/description-list.tsx";
import { Notice } from "#app/components/notice.tsx";
import { Page } from "#app/components/page.tsx";
import { speakLikeMail } from "#app/i18n/middleware.server.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import { refusal } from "#app/lib/refusal.ts";

/** Why whoever signed in could not accept; the page's words are `common:invitation.problem.<reason>`. */
const problems = ["other_address", "not_verified"] as const;

/** Looks only, for mail scanners open links too. Whom the letter went to is told to nobody. */
export async function loader({ context, params, request }: Route.LoaderArgs) {
	const invitation = await findInvitation(params.token);
	if (!invitation) throw await refused(request);
	await speakLikeMail(context, request, invitation.language);
	const asked = new URL(request.url).searchParams.get("problem");
	const { role, stateFips, endsOn, expiresAt, invitedBy } = invitation;
	return {
		invitation: { role, stateFips, endsOn, expiresAt, invitedBy },
		problem: problems.find((reason) => reason === asked) ?? null,
		signedIn: context.get(visitorContext).person?.displayName ?? null,
	};
}

/** The button alone takes the invitation along to the sign-in, whose answer decides. */
export async function action({ params, request }: Route.ActionArgs) {
	if (!(await findInvitation(params.token))) throw await refused(request);
	return data({ ready: true }, { headers: { "set-cookie": await keepInvitation(params.token) } });
}

/** One answer for every link that opens nothing, until somebody has tried too many of them. */
async function refused(request: Request) {
	return refusal((await countWrongLink(request)) ? "invitation_not_valid" : "too_many_tries");
}

export default function Invitation({ loaderData, actionData }: Route.ComponentProps) {
	const { t } = useTranslation();
	const format = useFormat();
	const { invitation, problem, signedIn } = loaderData;
	const { role, stateFips, endsOn, expiresAt, invitedBy } = invitation;
	return (
		<Page title={t("invitation.title")} lead={t("invitation.lead", { name: invitedBy })} width="narrow">
			{problem && (
				<div role="alert">
					<Notice tone="attention" title={t(`invitation.problem.${problem}.title`)}>
						{t(`invitation.problem.${problem}.body`, { name: signedIn ?? "" })}
					</Notice>
				</div>
			)}
			<DescriptionList
				items={[
					{ term: t("invitation.role"), detail: t(`role.${role}`) },
					...(stateFips.length > 0
						? [{ term: t("invitation.states"), detail: format.list(stateFips.map((state) => t(`state.${state}`))) }]
						: []),
					...(endsOn ? [{ term: t("invitation.endsOn"), detail: format.day(endsOn) }] : []),
					{ term: t("invitation.until"), detail: format.moment(expiresAt) },
				]}
			/>
			<div className="mt-6">
				{actionData?.ready ? (
					<Notice tone="info" title={t("invitation.nextTitle")}>
						<p className="mb-4">{t("invitation.next")}</p>
						<ButtonLink to="/sign-in/start?next=/me" reloadDocument>
							{t("signIn.continue")}
						</ButtonLink>
					</Notice>
				) : (
					<Form method="post">
						<p className="mb-4">{t("invitation.how")}</p>
						<Button>{t("invitation.accept")}</Button>
					</Form>
				)}
			</div>
		</Page>
	);
}

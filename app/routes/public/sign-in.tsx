import { useTranslation } from "react-i18next";
import { data, redirect } from "react-router";
import type { Route } from "./+types/sign-in";
import { type SignInFailure, signInFailures } from "#app/auth/provider.server.ts";
import { visitorContext } from "#app/auth/visitor.server.ts";
import { ButtonLink } from "#app/components/button.tsx";
import { Notice } from "#app/components/notice.tsx";
import { Page } from "#app/components/page.tsx";
import { Section } from "#app/components/section.tsx";
import { useDemo } from "#app/components/shell-data.ts";
import { helpContact } from "#app/lib/help-contact.ts";
import { sameSitePath } from "#app/lib/same-site-path.ts";

export function loader({ context, request }: Route.LoaderArgs) {
	const search = new URL(request.url).searchParams;
	const next = sameSitePath(search.get("next"), "/me");
	if (context.get(visitorContext).person) throw redirect(next, 303);
	const problem = signInFailures.find((reason) => reason === search.get("problem")) ?? null;
	return data({ next, problem }, { status: problem === "away" ? 503 : 200 });
}

export default function SignIn({ loaderData }: Route.ComponentProps) {
	const { t } = useTranslation();
	const demo = useDemo();
	const { next, problem } = loaderData;
	return (
		<Page title={t("signIn.title")} lead={t("signIn.lead")} width="narrow">
			{problem && <Failure reason={problem} />}
			{demo && <Notice tone="info">{t("signIn.demo")}</Notice>}
			<p className="mb-4">{t("signIn.where")}</p>
			<ButtonLink to={`/sign-in/start?next=${encodeURIComponent(next)}`} reloadDocument>
				{t("signIn.continue")}
			</ButtonLink>
			<Section title={t("signIn.whoTitle")}>
				<ul className="list-disc space-y-1 pl-5">
					<li>{t("signIn.whoAssociate")}</li>
					<li>{t("signIn.whoCoordinator")}</li>
					<li>{t("signIn.whoResearcher")}</li>
					<li>{t("signIn.whoGrower")}</li>
				</ul>
			</Section>
		</Page>
	);
}

function Failure({ reason }: { reason: SignInFailure }) {
	const { t } = useTranslation();
	return (
		<div role="alert">
			<Notice tone="attention" title={t(`signIn.problem.${reason}.title`)}>
				<p>{t(`signIn.problem.${reason}.body`, { email: helpContact.email })}</p>
			</Notice>
		</div>
	);
}

import { useTranslation } from "react-i18next";
import { redirect } from "react-router";
import type { Route } from "./+types/me";
import { findAccount } from "#app/auth/accounts.server.ts";
import { requirePerson } from "#app/auth/guard.server.ts";
import type { Grants } from "#app/auth/viewer.ts";
import { visitorContext } from "#app/auth/visitor.server.ts";
import { ButtonLink } from "#app/components/button.tsx";
import { DescriptionList } from "#app/components/description-list.tsx";
import { Page } from "#app/components/page.tsx";
import { helpContact } from "#app/lib/help-contact.ts";
import { refusal } from "#app/lib/refusal.ts";

/** Where a signed-in person goes: to the one area granted, or to a choice, or to words about asking for a role. */
export async function loader({ context }: Route.LoaderArgs) {
	const { viewer, transaction } = requirePerson(context);
	const areas = areasOf(context.get(visitorContext).grants);
	const [only] = areas;
	if (only && areas.length === 1) throw redirect(`/${only}`, 303);
	const account = await transaction((trx) => findAccount(trx, viewer.personId));
	if (!account) throw refusal("sign_in_needed");
	return { account, areas };
}

function areasOf(grants: Grants) {
	const granted = {
		desk: grants.stateFips.length > 0,
		network: grants.coordinator,
		dataroom: grants.researcher,
		orchard: grants.operationIds.length > 0,
	};
	return (["desk", "network", "dataroom", "orchard"] as const).filter((area) => granted[area]);
}

export default function Me({ loaderData }: Route.ComponentProps) {
	const { t } = useTranslation();
	const { account, areas } = loaderData;
	const none = areas.length === 0;
	return (
		<Page
			title={t("me.title", { name: account.displayName })}
			lead={t(none ? "me.noneLead" : "me.several")}
			width="narrow"
		>
			{none ? (
				<NoGrant account={account} />
			) : (
				<div className="flex flex-wrap gap-3">
					{areas.map((area) => (
						<ButtonLink key={area} to={`/${area}`} kind="secondary">
							{t(`nav.${area}`)}
						</ButtonLink>
					))}
				</div>
			)}
		</Page>
	);
}

function NoGrant({ account }: { account: Route.ComponentProps["loaderData"]["account"] }) {
	const { t } = useTranslation();
	return (
		<>
			<p className="mb-4">{t("me.noneNext", { email: helpContact.email })}</p>
			<DescriptionList
				items={[
					{ term: t("me.name"), detail: account.displayName },
					{ term: t("me.subject"), detail: <code>{account.subject}</code> },
				]}
			/>
			<div className="mt-4">
				<ButtonLink to="/me" kind="secondary" reloadDocument>
					{t("me.reload")}
				</ButtonLink>
			</div>
			<p className="mb-3 mt-8">{t("me.researcher")}</p>
			<ButtonLink to="/dataroom/access" kind="secondary">
				{t("me.askAccess")}
			</ButtonLink>
		</>
	);
}

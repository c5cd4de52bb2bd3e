import { useTranslation } from "react-i18next";
import { href, Link } from "react-router";
import type { Route } from "./+types/privacy";
import { sessionDays, sessionIdleHours } from "#app/auth/session.server.ts";
import { ButtonLink } from "#app/components/button.tsx";
import { DataTable } from "#app/components/data-table.tsx";
import { Page } from "#app/components/page.tsx";
import { Pledge } from "#app/components/pledge.tsx";
import { Section } from "#app/components/section.tsx";
import { useFormat } from "#app/i18n/use-format.ts";
import { helpContact } from "#app/lib/help-contact.ts";
import { pledgeVersion } from "#app/lib/pledge.ts";
import { findLatestRelease } from "#app/publish/releases.server.ts";

export async function loader() {
	const release = await findLatestRelease();
	return { minimumOwners: release?.rules.minimumOwners ?? null, hours: sessionIdleHours, days: sessionDays };
}

const kept = [
	...(["list", "pin", "answers", "photos", "contacts", "phone"] as const),
	...(["session", "readers", "researchers", "log"] as const),
] as const;
/** As long as a request for reports waits for its button. */
const requestDays = 2;

export default function Privacy({ loaderData }: Route.ComponentProps) {
	const { t } = useTranslation("site");
	return (
		<Page title={t("privacy.title")} lead={t("privacy.lead")} width="narrow">
			<Section title={t("privacy.pledge.title")} id="pledge">
				<div className="border-l-4 border-damson bg-damson-wash px-5 py-4">
					<Pledge />
				</div>
				<p className="mt-3 text-quiet">{t("privacy.pledge.version", { version: pledgeVersion })}</p>
			</Section>
			<Seen />
			<Published minimumOwners={loaderData.minimumOwners} />
			<Kept {...loaderData} />
			<Rights />
		</Page>
	);
}

function Seen() {
	const { t } = useTranslation("site");
	return (
		<Section title={t("privacy.seen.title")} id="seen">
			<ul className="list-disc space-y-2 pl-6">
				{(["associates", "coordinator", "sell", "law"] as const).map((line) => (
					<li key={line}>{t(`privacy.seen.${line}`)}</li>
				))}
			</ul>
		</Section>
	);
}

function Published({ minimumOwners }: Pick<Route.ComponentProps["loaderData"], "minimumOwners">) {
	const { t } = useTranslation("site");
	const format = useFormat();
	return (
		<Section title={t("privacy.published.title")} id="published">
			<p>{t("privacy.published.body")}</p>
			{minimumOwners !== null && (
				<p className="mt-3">
					{t("privacy.published.minimum", { count: minimumOwners, value: format.number(minimumOwners) })}
				</p>
			)}
			<p className="mt-3">
				<Link to={`${href("/methods")}#privacy`}>{t("privacy.published.methods")}</Link>
			</p>
		</Section>
	);
}

function Kept({ hours, days }: Pick<Route.ComponentProps["loaderData"], "hours" | "days">) {
	const { t } = useTranslation("site");
	const format = useFormat();
	const values = { hours: format.number(hours), days: format.number(days), requestDays: format.number(requestDays) };
	return (
		<Section title={t("privacy.kept.title")} id="kept">
			<DataTable
				caption={t("privacy.kept.caption")}
				captionHidden
				rows={[...kept]}
				rowKey={(row) => row}
				columns={[
					{ key: "what", header: t("privacy.kept.what"), cell: (row) => t(`privacy.kept.rows.${row}.what`) },
					{ key: "long", header: t("privacy.kept.long"), cell: (row) => t(`privacy.kept.rows.${row}.long`, values) },
				]}
			/>
		</Section>
	);
}

function Rights() {
	const { t } = useTranslation("site");
	return (
		<Section title={t("privacy.rights.title")} id="rights">
			<ul className="list-disc space-y-2 pl-6">
				{(["see", "correct", "takeBack", "mail", "leave"] as const).map((right) => (
					<li key={right}>{t(`privacy.rights.${right}`)}</li>
				))}
			</ul>
			<p className="mt-4">{t("privacy.rights.where")}</p>
			<p className="mt-2 font-bold">{t("about.contact", helpContact)}</p>
			<p className="no-print mt-5">
				<ButtonLink to={href("/orchard")} kind="secondary">
					{t("privacy.rights.own")}
				</ButtonLink>
			</p>
		</Section>
	);
}

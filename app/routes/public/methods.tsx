import { useTranslation } from "react-i18next";
import { href, Link } from "react-router";
import type { Route } from "./+types/methods";
import { Page } from "#app/components/page.tsx";
import { Section } from "#app/components/section.tsx";
import { useFormat } from "#app/i18n/use-format.ts";
import { helpContact } from "#app/lib/help-contact.ts";
import { findLatestRelease } from "#app/publish/releases.server.ts";

export async function loader() {
	const release = await findLatestRelease();
	return { latest: release ? { number: release.number, rules: release.rules, method: release.method } : null };
}

/** The settings of the latest release as words; a sentence about a setting that no release holds is left out. */
function useSettings({ latest }: Route.ComponentProps["loaderData"]) {
	const { t } = useTranslation("public");
	const format = useFormat();
	const { minimumOwners, dominancePercent, largestOwners, largestPercent, steadyCv, careCv, steadyDays, careDays } =
		latest?.rules ?? {};
	const percent = (fraction: number) => format.quantity(fraction * 100, "percent");
	const { all, weighting } = latest?.method ?? {};
	return {
		minimum: minimumOwners
			? t("methods.private.minimum", { count: minimumOwners, value: format.number(minimumOwners) })
			: t("methods.private.minimumUnset"),
		dominance: dominancePercent
			? t("methods.private.dominance", { percent: format.quantity(dominancePercent, "percent") })
			: "",
		largest:
			largestOwners && largestPercent
				? t("methods.private.largest", {
						owners: format.number(largestOwners),
						percent: format.quantity(largestPercent, "percent"),
					})
				: "",
		cutOffs: steadyCv && careCv ? t("methods.sure.cutOffs", { steady: percent(steadyCv), care: percent(careCv) }) : "",
		dayCutOffs:
			steadyDays && careDays
				? t("methods.sure.dayCutOffs", {
						steady: format.quantity(steadyDays, "days"),
						care: format.quantity(careDays, "days"),
					})
				: "",
		weighed: weighting && weighting !== "design" ? t(`methods.weighed.by.${weighting}`) : "",
		answered: all
			? t("methods.asked.latest", {
					answered: format.number(all.answered),
					asked: format.number(all.asked),
					number: latest?.number,
				})
			: "",
	};
}

export default function Methods({ loaderData }: Route.ComponentProps) {
	const { t } = useTranslation("public");
	const settings = useSettings(loaderData);
	const { latest } = loaderData;
	return (
		<Page title={t("methods.title")} lead={t("methods.lead")} width="narrow">
			<Section title={t("methods.asked.title")} id="asked">
				<Text lines={[t("methods.asked.who"), t("methods.asked.when"), settings.answered]} />
			</Section>
			<Section title={t("methods.weighed.title")} id="weighed">
				<Text lines={[t("methods.weighed.plain"), settings.weighed, t("methods.weighed.ratio")]} />
				<Text lines={[t("methods.weighed.once"), t("methods.weighed.missing")]} />
			</Section>
			<Section title={t("methods.sure.title")} id="sure">
				<Text lines={[t("methods.sure.plain"), t("methods.sure.words"), settings.cutOffs, settings.dayCutOffs]} />
				<Text lines={[t("methods.sure.days"), t("methods.sure.rounded")]} />
			</Section>
			<Section title={t("methods.private.title")} id="privacy">
				<Text lines={[t("methods.private.pledge"), settings.minimum, settings.dominance, settings.largest]} />
				<Text lines={[t("methods.private.shields"), t("methods.private.oneWord"), t("methods.private.kept")]} />
				<Text lines={[t("methods.private.contact", helpContact)]} />
				<p>
					<Link to={href("/privacy")}>{t("site:about.more.privacy")}</Link>
				</p>
			</Section>
			<Section title={t("methods.detail.title")} id="detail">
				<Text lines={[t("methods.detail.design"), t("methods.detail.calibrated")]} />
				<Text lines={[t("methods.detail.estimator"), t("methods.detail.variance")]} />
				<Text lines={[t("methods.detail.joined"), t("methods.detail.protection"), t("methods.detail.audit")]} />
				{latest && (
					<p>
						<Link to={href("/data/:release", { release: `${latest.number}` })}>
							{t("methods.detail.settings", { number: latest.number })}
						</Link>
					</p>
				)}
			</Section>
		</Page>
	);
}

function Text({ lines }: { lines: string[] }) {
	return lines.filter(Boolean).map((line) => (
		<p key={line} className="my-3">
			{line}
		</p>
	));
}

import { useTranslation } from "react-i18next";
import { href } from "react-router";
import type { Route } from "./+types/compare";
import { requireOrchard } from "#app/auth/guard.server.ts";
import { findOwnFacts } from "#app/collect/own-facts.server.ts";
import { ButtonLink } from "#app/components/button.tsx";
import { EmptyState } from "#app/components/empty-state.tsx";
import { Notice } from "#app/components/notice.tsx";
import { Page } from "#app/components/page.tsx";
import { wordsIn } from "#app/i18n/language.ts";
import { refusal } from "#app/lib/refusal.ts";
import { findComparison } from "#app/publish/comparison.server.ts";
import { BackToOrchard } from "./parts/back-to-orchard.tsx";
import { OperationBeside } from "./parts/operation-beside.tsx";

/** Own answers come by the grower's own scope; what stands beside them, as the reader gets it. */
export async function loader({ context, params }: Route.LoaderArgs) {
	const grower = requireOrchard(context);
	const own = await grower.transaction((trx) => findOwnFacts(trx, grower.viewer, params.surveyId));
	if (!own) throw refusal("orchard_not_found");
	const { season, title, releaseId } = own;
	const operations = [];
	for (const operation of own.operations) {
		const beside = releaseId ? await findComparison(releaseId, operation.countyFips, operation.figures) : undefined;
		operations.push({ ...operation, measures: beside?.measures ?? [], cells: beside?.cells ?? {} });
	}
	return { season, title, isReleased: releaseId !== null, operations };
}

export default function Compare({ loaderData }: Route.ComponentProps) {
	const { t, i18n } = useTranslation("orchard");
	const { season, title, isReleased, operations } = loaderData;
	const answered = operations.filter(({ figures }) => figures.length > 0);
	return (
		<Page
			title={t("compare.title", { survey: wordsIn(title, i18n.language), season })}
			lead={isReleased ? t("compare.lead") : undefined}
		>
			<BackToOrchard />
			{!isReleased && (
				<Notice tone="info" title={t("compare.notYetTitle")}>
					{t("compare.notYet")}
				</Notice>
			)}
			{isReleased && answered.length === 0 && (
				<EmptyState title={t("compare.nothingTitle")}>{t("compare.nothing")}</EmptyState>
			)}
			{isReleased && answered.map((operation) => <OperationBeside key={operation.operationId} operation={operation} />)}
			{isReleased && (
				<p className="no-print mt-8">
					<ButtonLink kind="secondary" to={href("/map")} reloadDocument>
						{t("compare.toMap")}
					</ButtonLink>
				</p>
			)}
		</Page>
	);
}

import { useTranslation } from "react-i18next";
import { href, Link } from "react-router";
import { z } from "zod";
import type { Route } from "./+types/response";
import { requireAssociate } from "#app/auth/guard.server.ts";
import { canEnter } from "#app/collect/entered-answers.server.ts";
import { findResponse } from "#app/collect/response-view.server.ts";
import { findSurvey } from "#app/collect/surveys.server.ts";
import { AnswerList } from "#app/components/answer-list.tsx";
import { DescriptionList } from "#app/components/description-list.tsx";
import { EmptyState } from "#app/components/empty-state.tsx";
import { Section } from "#app/components/section.tsx";
import { useFormat } from "#app/i18n/use-format.ts";
import { refusal } from "#app/lib/refusal.ts";
import { listResponseDecisions } from "./parts/checks/response-decisions.server.ts";
import { ResponseDecisions } from "./parts/checks/response-decisions.tsx";
import { GrowerLink } from "./parts/grower-link.tsx";
import { useGrowerName } from "./parts/grower-name.ts";

const Version = z.coerce.number().int().optional().catch(undefined);

export async function loader({ context, params, request }: Route.LoaderArgs) {
	const desk = requireAssociate(context);
	const version = Version.parse(new URL(request.url).searchParams.get("version") ?? undefined);
	const response = await desk.transaction(async (trx) => {
		const survey = await findSurvey(trx, desk.viewer, params.surveyId);
		const found = survey && (await findResponse(trx, desk.viewer, params, version));
		if (!found) return undefined;
		const { surveyId, responseId } = params;
		return {
			...found,
			canEnter: await canEnter(trx, desk.viewer, { surveyId, operationId: found.operationId }),
			decisions: await listResponseDecisions(trx, surveyId, responseId),
		};
	});
	if (!response) throw refusal("response_not_found");
	return response;
}

/** One grower's answers as they were sent in. */
export default function ResponsePage({ loaderData: response, params }: Route.ComponentProps) {
	const { t } = useTranslation("desk");
	const format = useFormat();
	const { operationId, timeZone } = response;
	const operationName = useGrowerName()(response.operationName);
	return (
		<>
			<p className="no-print">
				<Link to={href("/desk/surveys/:surveyId/responses", { surveyId: params.surveyId })}>{t("response.back")}</Link>
			</p>
			<Section title={t("response.title", { name: operationName })}>
				<DescriptionList
					items={[
						{
							term: t("growers.name"),
							detail: (
								<GrowerLink operationId={operationId} className="print-plain">
									{operationName}
								</GrowerLink>
							),
						},
						{ term: t("growers.contact"), detail: response.contactName },
						{
							term: t("common:areaKind.county"),
							detail: t("growers.county", { county: response.countyName, state: response.statePostal }),
						},
						{ term: t("response.receipt"), detail: response.receiptCode ?? t("response.noReceipt") },
						{ term: t("response.how"), detail: t(`response.mode.${response.mode}`) },
						{ term: t("response.language"), detail: t(`common:language.${response.language}`) },
						{
							term: t("response.pledge"),
							detail: t("response.pledgeWhen", {
								version: response.pledgeVersion,
								moment: format.moment(response.pledgedAt, timeZone),
							}),
						},
						{ term: t("response.sentIn"), detail: <Versions response={response} /> },
					]}
				/>
				{response.withdrawnAt === null && (
					<p className="no-print mt-3">
						{response.canEnter ? (
							<Link to={href("/desk/surveys/:surveyId/enter/:operationId", { surveyId: params.surveyId, operationId })}>
								{t("answered:enter.change")}
							</Link>
						) : (
							t("answered:enter.changeEnded")
						)}
					</p>
				)}
				<ResponseDecisions decisions={response.decisions} surveyId={params.surveyId} timeZone={timeZone} />
				{response.shownVersion === null ? (
					<div className="mt-8">
						<NothingSent response={response} />
					</div>
				) : (
					<AnswerList
						groups={response.groups}
						level={3}
						photoHref={(photoId) =>
							href("/desk/surveys/:surveyId/responses/:responseId/photos/:photoId", { ...params, photoId })
						}
					/>
				)}
			</Section>
		</>
	);
}

function NothingSent({
	response: { startedAt, withdrawnAt, timeZone },
}: {
	response: Route.ComponentProps["loaderData"];
}) {
	const { t } = useTranslation("desk");
	const format = useFormat();
	const kind = withdrawnAt ? "withdrawn" : "draft";
	return (
		<EmptyState title={t(`response.${kind}Title`)}>
			{t(`response.${kind}Body`, { moment: format.moment(withdrawnAt ?? startedAt, timeZone) })}
		</EmptyState>
	);
}

/** Each time the answers were sent in, newest first; what was sent before stays to be read. */
function Versions({ response }: { response: Route.ComponentProps["loaderData"] }) {
	const { t } = useTranslation("desk");
	const format = useFormat();
	const { submissions, shownVersion, timeZone } = response;
	if (submissions.length === 0) return t("response.notSentIn");
	return (
		<ul>
			{submissions.map(({ version, submittedAt, late, mode, enteredBy }) => {
				const moment = format.moment(submittedAt, timeZone);
				const words = t(late ? "response.versionLate" : "response.version", { version, moment });
				const how = mode !== "web" && t(`answered:enter.by.${mode}`, { name: enteredBy });
				return (
					<li key={version}>
						{version === shownVersion ? (
							<strong>{submissions.length > 1 ? t("response.shown", { version: words }) : words}</strong>
						) : (
							<Link to={`?version=${version}`} preventScrollReset className="print-plain">
								{words}
							</Link>
						)}
						{how && <span className="block text-sm text-quiet">{how}</span>}
					</li>
				);
			})}
		</ul>
	);
}

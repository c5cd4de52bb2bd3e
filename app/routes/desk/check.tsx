import { useTranslation } from "react-i18next";
import { data, href, Link, redirect } from "react-router";
import { z } from "zod";
import type { Route } from "./+types/check";
import { requireAssociate } from "#app/auth/guard.server.ts";
import { sessionContext } from "#app/auth/session.server.ts";
import { NotDone } from "#app/components/notice.tsx";
import { Section } from "#app/components/section.tsx";
import { getLanguage } from "#app/i18n/middleware.server.ts";
import { lookAgain } from "#app/lib/look-again.ts";
import { parseForm } from "#app/lib/parse-form.ts";
import { refusal } from "#app/lib/refusal.ts";
import { Decision } from "#app/review/findings.schema.ts";
import { FindingActions, type Mode, TypedBefore } from "./parts/checks/finding-actions.tsx";
import { FindingAnswers } from "./parts/checks/finding-answers.tsx";
import { FindingHistory } from "./parts/checks/finding-history.tsx";
import { FindingMoved } from "./parts/checks/finding-moved.tsx";
import { useToldWords } from "./parts/checks/finding-words.ts";
import { viewFinding } from "./parts/checks/finding-view.server.ts";
import { FindingState } from "./parts/checks/queue-table.tsx";
import { takeDecision } from "./parts/checks/take-decision.server.ts";
import { GrowerLink } from "./parts/grower-link.tsx";
import { useGrowerName } from "./parts/grower-name.ts";

/** `?do=correct&at=0`: which of the forms stands open, for one of the answers. */
const ModeQuery = z.object({
	do: z.enum(["correct", "set_aside"]).nullable().catch(null),
	at: z.coerce.number().int().min(0).max(50).catch(0),
});

export async function loader({ context, params, request }: Route.LoaderArgs) {
	const desk = requireAssociate(context);
	const asked = ModeQuery.parse(Object.fromEntries(new URL(request.url).searchParams));
	const view = await desk.transaction((trx) => viewFinding(trx, desk.viewer, params));
	if (!view) throw refusal("finding_not_found");
	const mode: Mode = view.answers[asked.at] ? { act: asked.do, at: asked.at } : { act: null, at: 0 };
	return { ...view, mode };
}

export async function action({ context, params, request }: Route.ActionArgs) {
	const desk = requireAssociate(context);
	const posted = await request.formData();
	const form = parseForm(Decision, posted);
	const values = Object.fromEntries([...new Set(posted.keys())].map((name) => [name, posted.getAll(name).map(String)]));
	const nothing = { values, problems: [], refused: null, moved: null };
	if (!form.ok) {
		if (form.problems.some(({ field }) => field !== "reason" && field !== "words"))
			throw refusal("form_not_understood");
		return data({ ...nothing, problems: form.problems }, { status: 400 });
	}
	const language = getLanguage(context);
	const taken = await desk.transaction((trx) =>
		takeDecision(trx, desk.viewer, params, form.value, { values, language }),
	);
	switch (taken.outcome) {
		case "not_found":
			throw refusal("finding_not_found");
		case "problems":
			return data({ ...nothing, problems: taken.problems }, { status: 400 });
		case "preview":
			return data({ ...nothing, moved: taken.moved });
		case "done":
			context.get(sessionContext).flash("toast", { key: `checks:toast.${form.value.act}` });
			return redirect(href("/desk/surveys/:surveyId/checks/:findingId", params), 303);
		default:
			return data({ ...nothing, refused: taken.outcome }, { status: 409 });
	}
}

export const shouldRevalidate = lookAgain;

/** One odd answer, what it stands beside, and what to do about it. */
export default function Check({ loaderData, actionData, params }: Route.ComponentProps) {
	const { finding, unit, moved } = loaderData;
	const { t } = useTranslation("checks");
	const told = useToldWords();
	const name = useGrowerName()(finding.operationName);
	const { surveyId } = params;
	return (
		<>
			<p className="no-print">
				<Link to={href("/desk/surveys/:surveyId/checks", { surveyId })} className="inline-flex min-h-11 items-center">
					← {t("finding.back")}
				</Link>
			</p>
			<Section title={t("finding.title", { kind: t(`kind.${finding.checkKind}`), name })}>
				{actionData?.refused && <Refused why={actionData.refused} sent={actionData} />}
				<p className="max-w-prose text-lg">{told(finding.told, unit)}</p>
				<p className="mt-3">
					<FindingState finding={finding} />
				</p>
				<p className="mt-3">
					<GrowerLink operationId={finding.operationId}>{name}</GrowerLink>
					{" · "}
					{[finding.contactName, finding.phone].filter(Boolean).join(" · ")}
					{" · "}
					{t("desk:growers.county", { county: finding.countyName, state: finding.statePostal })}
					{" · "}
					<Link
						to={href("/desk/surveys/:surveyId/responses/:responseId", { surveyId, responseId: finding.responseId })}
					>
						{t("finding.toResponse")}
					</Link>
				</p>
			</Section>
			<FindingAnswers view={loaderData} />
			<FindingActions view={loaderData} mode={loaderData.mode} sent={actionData} />
			<FindingMoved moved={actionData?.moved ?? moved} />
			<FindingHistory view={loaderData} />
		</>
	);
}

/** Somebody was there first: nothing was kept, and what was typed is not lost. */
function Refused({ why, sent }: { why: string; sent: { values: Record<string, string[]> } }) {
	const { t } = useTranslation("checks");
	return (
		<NotDone tone="attention" answer={sent} title={t(`refused.${why}.title`)}>
			<p>{t(`refused.${why}.body`)}</p>
			{(why === "changed" || why === "changed_by_you") && <TypedBefore values={sent.values} />}
		</NotDone>
	);
}

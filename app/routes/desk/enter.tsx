import { useTranslation } from "react-i18next";
import { data, href, redirect, type ShouldRevalidateFunctionArgs } from "react-router";
import type { Route } from "./+types/enter";
import { requireAssociate } from "#app/auth/guard.server.ts";
import { sessionContext } from "#app/auth/session.server.ts";
import { findEntry } from "#app/collect/entered-answers.server.ts";
import { entryValues } from "#app/collect/read-entry.ts";
import { listAllSteps } from "#app/collect/steps.ts";
import { EmptyState } from "#app/components/empty-state.tsx";
import { Section } from "#app/components/section.tsx";
import { getLanguage } from "#app/i18n/middleware.server.ts";
import { lookAgain } from "#app/lib/look-again.ts";
import { refusal } from "#app/lib/refusal.ts";
import { readPosted } from "../grower/parts/posted.server.ts";
import { EntryDraftEnd } from "./parts/entry/entry-draft-end.tsx";
import { EntryForm } from "./parts/entry/entry-form.tsx";
import { EntryNotices } from "./parts/entry/entry-notices.tsx";
import { takeEntry } from "./parts/entry/take-entry.server.ts";
import { useGrowerName } from "./parts/grower-name.ts";

export async function loader({ context, params }: Route.LoaderArgs) {
	const desk = requireAssociate(context);
	const entry = await desk.transaction((trx) => findEntry(trx, desk.viewer, params));
	if (!entry) throw refusal("operation_not_found");
	const { definition, plantings, sent, draft, language, crates, earlier, massUnit } = entry;
	const show = { language: getLanguage(context), massUnit, crates, earlier };
	return {
		operationName: entry.operationName,
		countyName: entry.countyName,
		timeZone: entry.timeZone,
		canSend: entry.isOpen || entry.isLate,
		isLate: entry.isLate,
		closesAt: entry.closesAt,
		response: entry.response,
		draft: draft && { startedAt: draft.startedAt, savedAt: draft.savedAt },
		others: entry.others,
		steps: listAllSteps(definition, plantings),
		values: draft?.typed ?? {
			...entryValues({ definition, plantings }, sent, show),
			mode: "telephone",
			language,
		},
	};
}

/** Keeps what was typed as the associate's draft, drops it, or sends the whole form in. */
export async function action({ context, params, request }: Route.ActionArgs) {
	const desk = requireAssociate(context);
	const { values, sent } = await readPosted(request);
	const { step, ...typed } = values;
	const taken = await desk.transaction((trx) =>
		takeEntry(trx, desk.viewer, params, { step, typed, seen: sent?.seen ?? 0, pageLanguage: getLanguage(context) }),
	);
	switch (taken.outcome) {
		case "not_found":
			throw refusal("operation_not_found");
		case "closed":
			throw refusal("survey_closed");
		case "not_understood":
			throw refusal("form_not_understood");
		case "kept":
			return data({ kept: true as const });
		case "mend":
			return data({ ...taken, values: typed }, { status: 400 });
		case "answered_meanwhile":
			return data({ ...taken, values: typed, problems: [], checks: [] }, { status: 409 });
		default:
			context.get(sessionContext).flash("toast", toastOf(taken));
			return redirect(href("/desk/surveys/:surveyId/calls", { surveyId: params.surveyId }), 303);
	}
}

function toastOf(taken: { outcome: "sent"; receiptCode: string } | { outcome: "left" | "dropped" }) {
	return taken.outcome === "sent"
		? { key: "answered:enter.toast.sent", values: { code: taken.receiptCode } }
		: { key: `answered:enter.toast.${taken.outcome}` };
}

/**
 * A draft kept while one types must not make the page anew under the fingers. Answers that came meanwhile must be known to the
 * page: it leads to them, and the next press is meant to go over them.
 */
export function shouldRevalidate(move: ShouldRevalidateFunctionArgs) {
	return move.formData?.get("step") !== "keep" && lookAgain(move);
}

/** All questions on one page, for answers told by telephone or standing on paper. */
export default function Enter({ loaderData, actionData, params }: Route.ComponentProps) {
	const { t } = useTranslation("answered");
	const name = useGrowerName()(loaderData.operationName);
	const posted = actionData && "values" in actionData ? actionData : undefined;
	return (
		<Section title={t("enter.title", { name })}>
			<EntryNotices {...loaderData} place={params} posted={posted} />
			{loaderData.canSend ? (
				<EntryForm key={params.operationId} shown={loaderData} posted={posted} />
			) : (
				<>
					<EmptyState title={t("enter.closedTitle")}>{t("enter.closedBody")}</EmptyState>
					{loaderData.draft && <EntryDraftEnd values={loaderData.values} />}
				</>
			)}
		</Section>
	);
}

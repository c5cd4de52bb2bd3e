import { useTranslation } from "react-i18next";
import { data, href, Link, redirect } from "react-router";
import type { Route } from "./+types/calls";
import { requireAssociate } from "#app/auth/guard.server.ts";
import { sessionContext } from "#app/auth/session.server.ts";
import { findCall, listCalls } from "#app/collect/calls.server.ts";
import { findOwnNote, takeBackNote } from "#app/collect/contact-undo.server.ts";
import { callFilters, CallQuery, ContactForm } from "#app/collect/contacts.schema.ts";
import { listContacts, noteContact } from "#app/collect/contacts.server.ts";
import { listEntryDrafts } from "#app/collect/entry-drafts.server.ts";
import { findSurvey } from "#app/collect/surveys.server.ts";
import { ChoiceField } from "#app/components/choice-field.tsx";
import { ErrorSummary } from "#app/components/error-summary.tsx";
import { KeyPaging } from "#app/components/key-paging.tsx";
import { SearchBar } from "#app/components/search-bar.tsx";
import { parseForm } from "#app/lib/parse-form.ts";
import { refusal } from "#app/lib/refusal.ts";
import { CallCard } from "./parts/calls/call-card.tsx";
import { CallTable } from "./parts/calls/call-table.tsx";
import { OwnNote } from "./parts/calls/own-note.tsx";
import { readCallWorth } from "./parts/calls/call-worth.server.ts";
import { EntryDrafts } from "./parts/entry/entry-drafts.tsx";
import { useContactLabels } from "./parts/growers/contact-fields.tsx";

export async function loader({ context, params, request }: Route.LoaderArgs) {
	const desk = requireAssociate(context);
	const query = CallQuery.parse(Object.fromEntries(new URL(request.url).searchParams));
	const { viewer } = desk;
	const found = await desk.transaction(async (trx) => {
		const survey = await findSurvey(trx, viewer, params.surveyId);
		const cells = survey && (await readCallWorth(trx, viewer, survey.surveyId));
		if (!cells) return undefined;
		const { surveyId, state, stateFips } = survey;
		const call = query.call ? await findCall(trx, viewer, { surveyId, operationId: query.call }) : undefined;
		if (query.call && !call) return undefined;
		return {
			state,
			noted: query.noted ? ((await findOwnNote(trx, viewer, { surveyId, operationId: query.noted })) ?? null) : null,
			drafts: await listEntryDrafts(trx, viewer, surveyId),
			states: stateFips.filter((one) => viewer.stateFips.includes(one)),
			calls: await listCalls(trx, viewer, surveyId, query, cells),
			call: call ? { ...call, contacts: await listContacts(trx, call.operationId) } : null,
		};
	});
	if (!found) throw refusal("survey_not_found");
	return { ...found, query };
}

/** Notes what a call came to, about this survey. */
export async function action({ context, params, request }: Route.ActionArgs) {
	const desk = requireAssociate(context);
	const query = CallQuery.parse(Object.fromEntries(new URL(request.url).searchParams));
	const sent = await request.formData();
	if (sent.get("step") === "take_back" && query.noted !== null) {
		const place = { surveyId: params.surveyId, operationId: query.noted };
		const taken = await desk.transaction((trx) => takeBackNote(trx, desk.viewer, place));
		context.get(sessionContext).flash("toast", { key: `answered:calls.toast.${taken}` });
		return redirect(`${href("/desk/surveys/:surveyId/calls", params)}?${listAddress(request)}`, 303);
	}
	const form = parseForm(ContactForm, sent);
	if (query.call === null) throw refusal("form_not_understood");
	if (!form.ok) return data({ values: form.values, problems: form.problems }, { status: 400 });

	const contact = { ...form.value, surveyId: params.surveyId };
	const outcome = await desk.transaction((trx) => noteContact(trx, desk.viewer, query.call!, contact));
	if (outcome === "not_found") throw refusal("operation_not_found");
	context.get(sessionContext).flash("toast", { key: "growers:contact.saved" });
	const list = listAddress(request);
	list.set("noted", query.call);
	return redirect(`${href("/desk/surveys/:surveyId/calls", params)}?${list}`, 303);
}

/** The list as it was, without the grower who was on the line. */
function listAddress(request: Request): URLSearchParams {
	const search = new URL(request.url).searchParams;
	search.delete("call");
	search.delete("noted");
	return search;
}

/** Whom to ring next, and what came of it. */
export default function Calls({ loaderData, actionData, params }: Route.ComponentProps) {
	const { calls, call, query, states, drafts, state, noted } = loaderData;
	const { t } = useTranslation("answered");
	const labels = useContactLabels();
	return (
		<>
			<ErrorSummary problems={actionData?.problems} labels={labels} />
			{call && (
				<CallCard
					key={call.operationId}
					call={call}
					surveyId={params.surveyId}
					isOpen={state === "open"}
					{...actionData}
				/>
			)}
			{noted && <OwnNote note={noted} />}
			<EntryDrafts drafts={drafts} surveyId={params.surveyId} />
			<p className="mb-4 max-w-prose">{t("calls.why")}</p>
			<SearchBar label={t("calls.search")} defaultValue={query.q}>
				<ChoiceField
					kind="select"
					name="show"
					legend={t("calls.show")}
					defaultValue={query.show}
					options={callFilters.map((filter) => ({ value: filter, label: t(`calls.filter.${filter}`) }))}
				/>
				{states.length > 1 && (
					<ChoiceField
						kind="select"
						name="state"
						legend={t("common:areaKind.state")}
						defaultValue={query.state}
						options={[
							{ value: "all", label: t("release:estimates.allStates") },
							...states.map((fips) => ({ value: fips, label: t(`common:state.${fips}`) })),
						]}
					/>
				)}
			</SearchBar>
			<CallTable
				rows={calls.rows}
				caption={t(`calls.filter.${query.show}`)}
				isFiltered={query.q !== "" || query.show !== "all"}
			/>
			<p className="no-print mt-3">
				<Link to={href("/desk/surveys/:surveyId/paper/:operationId?", { surveyId: params.surveyId })}>
					{t("paper.all")}
				</Link>
			</p>
			<KeyPaging before={calls.before} after={calls.after} total={calls.total} moreThanTotal={calls.moreThanTotal} />
		</>
	);
}

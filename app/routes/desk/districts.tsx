import { useTranslation } from "react-i18next";
import { data, Form, redirect } from "react-router";
import { z } from "zod";
import type { Route } from "./+types/districts";
import { logEvent } from "#app/auth/event-log.server.ts";
import { requireAssociate } from "#app/auth/guard.server.ts";
import { sessionContext } from "#app/auth/session.server.ts";
import { Button } from "#app/components/button.tsx";
import { ChoiceField } from "#app/components/choice-field.tsx";
import { Confirm } from "#app/components/confirm.tsx";
import { ErrorSummary } from "#app/components/error-summary.tsx";
import { Notice } from "#app/components/notice.tsx";
import { Page } from "#app/components/page.tsx";
import { Section } from "#app/components/section.tsx";
import { DistrictsForm } from "#app/directory/districts.schema.ts";
import { findStateDistricts, redrawDistricts, undoRedrawing } from "#app/directory/districts.server.ts";
import { type DistrictNames, districtProblems, districtsOf, nameDistricts } from "#app/directory/districts.ts";
import { countyName } from "#app/i18n/county-name.ts";
import { wordsIn } from "#app/i18n/language.ts";
import { getLanguage, getT } from "#app/i18n/middleware.server.ts";
import { lookAgain } from "#app/lib/look-again.ts";
import { parseForm, type Problem } from "#app/lib/parse-form.ts";
import { refusal } from "#app/lib/refusal.ts";
import { countGrouping, type DistrictProposal, proposeDistricts } from "#app/protect/districts.ts";
import { pictureOf } from "#app/publish/picture.server.ts";
import { addressOf } from "./parts/districts/address.ts";
import { BeforeAndAfter } from "./parts/districts/before-and-after.tsx";
import { CountyNames } from "./parts/districts/county-names.tsx";
import type { Grouping } from "./parts/districts/district-map.tsx";
import { LastChange } from "./parts/districts/last-change.tsx";
import { readJudgedBy } from "./parts/districts/grouping.server.ts";

/** `?state=&survey=&propose=1`: whose counties, by which answers, and whether the boxes hold the proposal. */
const Query = z.object({
	state: z.string().catch(""),
	survey: z.string().catch(""),
	propose: z.literal("1").optional().catch(undefined),
});

export async function loader({ context, request }: Route.LoaderArgs) {
	const desk = requireAssociate(context);
	const query = Query.parse(Object.fromEntries(new URL(request.url).searchParams));
	const stateFips = query.state || (desk.viewer.stateFips[0] ?? "");
	const t = getT(context, "districts");
	const found = await desk.transaction(async (trx) => {
		const state = await findStateDistricts(trx, desk.viewer, stateFips);
		if (!state) return undefined;
		const judgedBy = await readJudgedBy(trx, desk.viewer, query.survey, { state, names: namesNow(state) });
		return { state, ...judgedBy };
	});
	if (!found) throw refusal("page_not_found");
	const { state, surveys, survey, input } = found;
	const now = namesNow(state);
	const proposal = input && proposeDistricts(input);
	const proposed =
		proposal &&
		nameDistricts(
			proposal.districts,
			now,
			new Map(state.counties.map(({ countyFips, name }) => [countyFips, name])),
			(county) => t("madeName", { county }),
		);
	const language = getLanguage(context);
	return {
		states: desk.viewer.stateFips,
		stateFips,
		surveys: surveys.map(({ surveyId, season, title }) => ({ surveyId, season, title: wordsIn(title, language) })),
		surveyId: survey?.surveyId ?? null,
		counties: state.counties,
		version: state.version,
		lastChange: state.lastChange,
		proposes: query.propose === "1",
		judged: judgedOf(stateFips, now, proposal, proposed),
	};
}

export async function action({ context, request }: Route.ActionArgs) {
	const desk = requireAssociate(context);
	const query = Query.parse(Object.fromEntries(new URL(request.url).searchParams));
	const stateFips = query.state || (desk.viewer.stateFips[0] ?? "");
	const form = parseForm(DistrictsForm, await request.formData());
	if (!form.ok) return data({ typed: null, problems: form.problems, preview: null, meanwhile: false }, { status: 400 });
	const { decision, seen } = form.value;
	const names = new Map(Object.entries(form.value.district).filter(([, name]) => name !== ""));
	const typed = Object.fromEntries(names);
	const answer = await desk.transaction(async (trx) => {
		const state = await findStateDistricts(trx, desk.viewer, stateFips);
		if (!state) return "not_found";
		const known = new Set(state.counties.map(({ countyFips }) => countyFips));
		if ([...names.keys()].some((county) => !known.has(county))) return "not_found";
		const problems = decision === "undo" ? [] : districtProblems(names, state.neighborsOf);
		if (problems.length > 0) return { problems };
		if (decision === "preview") {
			const { input } = await readJudgedBy(trx, desk.viewer, query.survey, { state, names });
			return { preview: input ? groupingOf(names, countGrouping(input)) : null };
		}
		const outcome =
			decision === "undo"
				? await undoRedrawing(trx, desk.viewer, stateFips, seen)
				: await redrawDistricts(trx, desk.viewer, { stateFips, names, seen });
		if (outcome === "redrawn")
			await logEvent(trx, {
				personId: desk.viewer.personId,
				action: decision === "undo" ? "district.put_back" : "district.redrawn",
				subjectKind: "state",
				subjectId: stateFips,
				stateFips,
			});
		return outcome;
	});
	if (answer === "not_found") throw refusal("page_not_found");
	if (answer === "changed_meanwhile")
		return data({ typed, problems: [] as Problem[], preview: null, meanwhile: true }, { status: 409 });
	if (typeof answer === "object" && "problems" in answer)
		return data({ typed, problems: answer.problems, preview: null, meanwhile: false }, { status: 400 });
	if (typeof answer === "object")
		return { typed, problems: [] as Problem[], preview: answer.preview, meanwhile: false };
	context.get(sessionContext).flash("toast", { key: `districts:toast.${answer}` });
	return redirect(addressOf({ state: stateFips, survey: query.survey }), 303);
}

function judgedOf(
	stateFips: string,
	now: DistrictNames,
	proposal: DistrictProposal | undefined,
	proposed: DistrictNames | undefined,
) {
	const picture = pictureOf([stateFips]);
	if (!proposal || !proposed || !picture) return null;
	return {
		picture,
		now: groupingOf(now, proposal.before),
		proposed: { names: Object.fromEntries(proposed), ...groupingOf(proposed, proposal.after) },
	};
}

const namesNow = ({ counties }: { counties: { countyFips: string; district: string | null }[] }) =>
	new Map(counties.flatMap(({ countyFips, district }) => (district === null ? [] : [[countyFips, district] as const])));

function groupingOf(names: DistrictNames, { shown, withheld, told, untold }: Omit<Grouping, "districts">): Grouping {
	return { districts: districtsOf(names), shown, withheld, told, untold };
}

export const shouldRevalidate = lookAgain;

export default function Districts({ loaderData, actionData }: Route.ComponentProps) {
	const { t } = useTranslation("districts");
	const { counties, version, lastChange, judged, proposes, stateFips, surveyId } = loaderData;
	const proposed = judged?.proposed;
	const countyNow = new Map(counties.map(({ countyFips, district }) => [countyFips, district ?? ""]));
	const filled = actionData?.typed ?? (proposes ? proposed?.names : undefined);
	const typed = (fips: string) => (filled ? (filled[fips] ?? "") : (countyNow.get(fips) ?? ""));
	const rows = counties.map(({ countyFips, name, district }) => ({
		countyFips,
		name,
		now: district,
		typed: typed(countyFips),
	}));
	const names = [...new Set([...countyNow.values(), ...Object.values(proposed?.names ?? {})])]
		.filter(Boolean)
		.toSorted();
	const problems = actionData?.problems;
	return (
		<Page title={t("title")} lead={t("lead")}>
			<Choices loaderData={loaderData} />
			{actionData?.meanwhile && (
				<Notice tone="attention" title={t("meanwhile.title")}>
					<p>{t("meanwhile.body")}</p>
				</Notice>
			)}
			<BeforeAndAfter
				judged={judged}
				preview={actionData?.preview ?? null}
				proposal={addressOf({ state: stateFips, survey: surveyId, propose: true })}
			/>
			<Section title={t("table.title")}>
				<p className="mb-4 max-w-prose">{t("table.lead")}</p>
				<ErrorSummary
					problems={problems}
					labels={Object.fromEntries(
						counties.map(({ countyFips, name }) => [
							`district.${countyFips}`,
							t("table.boxLabel", { county: countyName(t, { name, countyFips }) }),
						]),
					)}
				/>
				<Form
					key={`${stateFips} ${version} ${proposes}`}
					method="post"
					action={addressOf({ state: stateFips, survey: surveyId })}
					noValidate
				>
					<input type="hidden" name="seen" value={version} />
					<CountyNames rows={rows} names={names} problems={problems} />
					<div className="mt-5 flex flex-wrap gap-3">
						<Button kind="secondary" name="decision" value="preview">
							{t("preview")}
						</Button>
						<Confirm
							trigger={t("save")}
							title={t("confirm.title")}
							body={t("confirm.body")}
							confirmLabel={t("save")}
							name="decision"
							value="save"
						/>
					</div>
				</Form>
			</Section>
			{lastChange && (
				<LastChange change={lastChange} version={version} action={addressOf({ state: stateFips, survey: surveyId })} />
			)}
		</Page>
	);
}

type Loaded = Route.ComponentProps["loaderData"];

function Choices({ loaderData: { states, stateFips, surveys, surveyId } }: { loaderData: Loaded }) {
	const { t } = useTranslation("districts");
	return (
		<Form method="get" className="mb-6 flex flex-wrap items-end gap-3 *:mb-0">
			<ChoiceField
				kind="select"
				legend={t("state")}
				name="state"
				defaultValue={stateFips}
				options={states.map((fips) => ({ value: fips, label: t(`common:state.${fips}`) }))}
			/>
			{surveys.length > 0 && (
				<ChoiceField
					kind="select"
					legend={t("survey")}
					name="survey"
					defaultValue={surveyId}
					options={surveys.map((survey) => ({ value: survey.surveyId, label: `${survey.title} ${survey.season}` }))}
				/>
			)}
			<Button kind="secondary">{t("look")}</Button>
		</Form>
	);
}

import { useTranslation } from "react-i18next";
import { data, Form, redirect } from "react-router";
import { z } from "zod";
import type { Route } from "./+types/districts";
import { requireAssociate } from "#app/auth/guard.server.ts";
import { sessionContext } from "#app/auth/session.server.ts";
import { Button } from "#app/components/button.tsx";
import { ChoiceField } from "#app/components/choice-field.tsx";
import type { Grouping } from "#app/components/districts/district-map.tsx";
import { DistrictTable } from "#app/components/districts/district-table.tsx";
import { LastChange } from "#app/components/districts/last-change.tsx";
import { Notice } from "#app/components/notice.tsx";
import { Page } from "#app/components/page.tsx";
import { DistrictsForm, typedOf } from "#app/directory/districts.schema.ts";
import { findStateDistricts } from "#app/directory/districts.server.ts";
import { type DistrictNames, districtsOf, nameDistricts } from "#app/directory/districts.ts";
import { carryOut, namesNow, readTyped } from "#app/directory/redrawing.server.ts";
import { wordsIn } from "#app/i18n/language.ts";
import { getLanguage, getT } from "#app/i18n/middleware.server.ts";
import { lookAgain } from "#app/lib/look-again.ts";
import { parseForm, type Problem } from "#app/lib/parse-form.ts";
import { refusal } from "#app/lib/refusal.ts";
import { countGrouping, type DistrictProposal, proposeDistricts } from "#app/protect/districts.ts";
import { pictureOf } from "#app/publish/picture.server.ts";
import { addressOf } from "./parts/districts/address.ts";
import { BeforeAndAfter } from "./parts/districts/before-and-after.tsx";
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
	const typed = typedOf(form.value);
	const answer = await desk.transaction(async (trx) => {
		const state = await findStateDistricts(trx, desk.viewer, stateFips);
		if (!state) return "not_found";
		const read = readTyped(state, form.value);
		if (read === "not_found") return read;
		const { names, problems } = read;
		if (problems.length > 0) return { problems };
		if (decision === "preview") {
			const { input } = await readJudgedBy(trx, desk.viewer, query.survey, { state, names });
			return { preview: input ? groupingOf(names, countGrouping(input)) : null };
		}
		return carryOut(trx, desk.viewer, stateFips, { decision, seen, names });
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

function groupingOf(names: DistrictNames, { shown, withheld, told, untold }: Omit<Grouping, "districts">): Grouping {
	return { districts: districtsOf(names), shown, withheld, told, untold };
}

export const shouldRevalidate = lookAgain;

export default function Districts({ loaderData, actionData }: Route.ComponentProps) {
	const { t } = useTranslation("districts");
	const { counties, version, lastChange, judged, proposes, stateFips, surveyId } = loaderData;
	const proposed = judged?.proposed;
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
			<DistrictTable
				counties={counties}
				filled={actionData?.typed ?? (proposes ? proposed?.names : undefined)}
				names={Object.values(proposed?.names ?? {})}
				version={version}
				action={addressOf({ state: stateFips, survey: surveyId })}
				problems={actionData?.problems}
				formKey={`${stateFips} ${version} ${proposes}`}
			>
				<Button kind="secondary" name="decision" value="preview">
					{t("preview")}
				</Button>
			</DistrictTable>
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

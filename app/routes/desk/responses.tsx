import { useTranslation } from "react-i18next";
import { useSearchParams } from "react-router";
import type { Route } from "./+types/responses";
import { requireAssociate } from "#app/auth/guard.server.ts";
import { frameFilters, FrameQuery } from "#app/collect/desk-lists.schema.ts";
import { listFrame } from "#app/collect/frame-list.server.ts";
import { findSurvey } from "#app/collect/surveys.server.ts";
import { Button, ButtonLink } from "#app/components/button.tsx";
import { ChoiceField } from "#app/components/choice-field.tsx";
import { KeyPaging } from "#app/components/key-paging.tsx";
import { SearchBar } from "#app/components/search-bar.tsx";
import { useHydrated } from "#app/components/use-hydrated.ts";
import { refusal } from "#app/lib/refusal.ts";
import { FrameTable } from "./parts/frame-table.tsx";

export async function loader({ context, params, request }: Route.LoaderArgs) {
	const desk = requireAssociate(context);
	const query = FrameQuery.parse(Object.fromEntries(new URL(request.url).searchParams));
	const found = await desk.transaction(async (trx) => {
		const survey = await findSurvey(trx, desk.viewer, params.surveyId);
		return (
			survey && {
				state: survey.state,
				timeZone: survey.timeZone,
				frame: await listFrame(trx, desk.viewer, survey.surveyId, query),
			}
		);
	});
	if (!found) throw refusal("survey_not_found");
	return { ...found, query };
}

/** Every grower who is asked, with what came back. */
export default function Responses({ loaderData, params }: Route.ComponentProps) {
	const { state, timeZone, frame, query } = loaderData;
	const { t } = useTranslation("desk");
	return (
		<>
			<SearchBar label={t("responses.search")} defaultValue={query.q}>
				<ChoiceField
					kind="select"
					name="show"
					legend={t("responses.show")}
					defaultValue={query.show}
					options={frameFilters.map((filter) => ({ value: filter, label: t(`responses.filter.${filter}`) }))}
				/>
				<input type="hidden" name="sort" value={query.sort} />
				<input type="hidden" name="direction" value={query.direction} />
			</SearchBar>
			{/* On paper the fields are gone, and with them what the list is of. */}
			<p className="hidden pb-2 font-bold print:block">
				{query.q
					? t("responses.printedSearch", { list: t(`responses.filter.${query.show}`), q: query.q })
					: t(`responses.filter.${query.show}`)}
			</p>
			<FrameTable
				rows={frame.rows}
				sort={{ key: query.sort, direction: query.direction }}
				caption={t(`responses.filter.${query.show}`)}
				surveyId={params.surveyId}
				timeZone={timeZone}
				empty={state === "draft" ? "draft" : query.show === "all" && !query.q ? "nobody" : "noMatch"}
			/>
			<KeyPaging before={frame.before} after={frame.after} total={frame.total} moreThanTotal={frame.moreThanTotal} />
			{frame.rows.length > 0 && <PrintPart all={query.all || (frame.before === null && frame.after === null)} />}
		</>
	);
}

/** A list longer than a page is first put on one, since paper has no next page. */
function PrintPart({ all }: { all: boolean }) {
	const { t } = useTranslation("desk");
	const hydrated = useHydrated();
	const [search] = useSearchParams();
	if (all && !hydrated) return null;
	const whole = new URLSearchParams(search);
	whole.set("all", "1");
	whole.delete("before");
	whole.delete("after");
	return (
		<p className="no-print mt-6">
			{all ? (
				<Button type="button" kind="secondary" onClick={() => window.print()}>
					{t("responses.print")}
				</Button>
			) : (
				<ButtonLink to={`?${whole}`} kind="secondary">
					{t("responses.printAll")}
				</ButtonLink>
			)}
		</p>
	);
}

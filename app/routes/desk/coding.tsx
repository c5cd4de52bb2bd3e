import { useTranslation } from "react-i18next";
import { data, Form, href, Link, redirect } from "react-router";
import type { Route } from "./+types/coding";
import { requireAssociate } from "#app/auth/guard.server.ts";
import { sessionContext } from "#app/auth/session.server.ts";
import { Button } from "#app/components/button.tsx";
import { classes } from "#app/components/classes.ts";
import { DataTable } from "#app/components/data-table.tsx";
import { EmptyState } from "#app/components/empty-state.tsx";
import { KeyPaging } from "#app/components/key-paging.tsx";
import { NotDone } from "#app/components/notice.tsx";
import { Section } from "#app/components/section.tsx";
import { wordsIn } from "#app/i18n/language.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import { lookAgain } from "#app/lib/look-again.ts";
import { parseForm } from "#app/lib/parse-form.ts";
import { refusal } from "#app/lib/refusal.ts";
import { Coding, CodingQuery, type CodingRow, giveCode, readCoding } from "./parts/checks/coding.server.ts";
import { useGrowerName } from "./parts/grower-name.ts";

export async function loader({ context, params, request }: Route.LoaderArgs) {
	const desk = requireAssociate(context);
	const query = CodingQuery.parse(Object.fromEntries(new URL(request.url).searchParams));
	const found = await desk.transaction((trx) => readCoding(trx, desk.viewer, params.surveyId, query));
	if (!found) throw refusal("survey_not_found");
	return found;
}

export async function action({ context, params, request }: Route.ActionArgs) {
	const desk = requireAssociate(context);
	const form = parseForm(Coding, await request.formData());
	if (!form.ok) throw refusal("form_not_understood");
	const outcome = await desk.transaction((trx) => giveCode(trx, desk.viewer, params.surveyId, form.value));
	if (outcome === "not_found") throw refusal("response_not_found");
	if (outcome === "changed" || outcome === "changed_by_you") return data({ refused: outcome }, { status: 409 });
	context.get(sessionContext).flash("toast", { key: `checks:toast.${outcome}` });
	const { search } = new URL(request.url);
	return redirect(`${href("/desk/surveys/:surveyId/coding", params)}${search}`, 303);
}

export const shouldRevalidate = lookAgain;

/** What growers told in words, to be counted under a code. */
export default function CodingPage({ loaderData, actionData, params }: Route.ComponentProps) {
	const { rows, before, after, total, asks, query } = loaderData;
	const { t } = useTranslation("checks");
	const format = useFormat();
	const to = href("/desk/surveys/:surveyId/coding", params);
	const empty = asks ? query.show : "none";
	return (
		<>
			<p className="no-print">
				<Link to={href("/desk/surveys/:surveyId/checks", params)} className="inline-flex min-h-11 items-center">
					← {t("coding.back")}
				</Link>
			</p>
			<Section title={t("coding.title")}>
				<p className="max-w-prose">{t("coding.lead")}</p>
				{actionData && (
					<NotDone tone="attention" answer={actionData} title={t(`coding.${actionData.refused}.title`)}>
						{t(`coding.${actionData.refused}.body`)}
					</NotDone>
				)}
				<nav aria-label={t("coding.show")} className="no-print my-4 flex flex-wrap gap-x-6">
					{(["open", "done"] as const).map((show) => (
						<Link
							key={show}
							to={show === "open" ? to : `${to}?show=done`}
							aria-current={show === query.show ? "page" : undefined}
							className={classes(
								"inline-flex min-h-11 items-center",
								show === query.show && "font-bold text-ink no-underline",
							)}
						>
							{t(`coding.states.${show}`)}
							{show === "open" && `: ${format.number(loaderData.open)}`}
						</Link>
					))}
				</nav>
				<DataTable
					caption={t("coding.title")}
					captionHidden
					rows={rows}
					rowKey={({ responseId, questionKey, plantingId }) => `${responseId} ${questionKey} ${plantingId}`}
					columns={[
						{ key: "words", header: t("coding.words"), cell: (row) => <Words row={row} surveyId={params.surveyId} /> },
						{ key: "counts", header: t("coding.counts"), cell: (row) => <Counts row={row} /> },
						{ key: "code", header: t("coding.code"), cell: (row) => <CodeForms row={row} /> },
					]}
					empty={<EmptyState title={t(`coding.empty.${empty}.title`)}>{t(`coding.empty.${empty}.body`)}</EmptyState>}
				/>
				{total > 0 && <KeyPaging before={before} after={after} total={total} />}
			</Section>
		</>
	);
}

function Words({ row, surveyId }: { row: CodingRow; surveyId: string }) {
	const { t } = useTranslation("checks");
	const name = useGrowerName()(row.operationName);
	const { responseId, cropKey } = row;
	const place = t("desk:growers.county", { county: row.countyName, state: row.statePostal });
	return (
		<>
			<strong className="whitespace-pre-line">{row.words}</strong>
			<span className="block text-xs text-quiet">
				<Link to={href("/desk/surveys/:surveyId/responses/:responseId", { surveyId, responseId })}>{name}</Link>
				{` · ${place}`}
				{cropKey && ` · ${t(`common:crop.${cropKey}`)}`}
			</span>
		</>
	);
}

function Counts({ row: { codes, choices, codedBy, codedAt, timeZone } }: { row: CodingRow }) {
	const { t, i18n } = useTranslation("checks");
	const format = useFormat();
	const names = choices.filter(({ key }) => codes?.includes(key)).map(({ text }) => wordsIn(text, i18n.language));
	return (
		<>
			{names.length > 0 ? format.list(names) : t("coding.other")}
			{codes && codedAt && (
				<span className="block text-xs text-quiet">
					{t("coding.by", { name: codedBy, moment: format.moment(codedAt, timeZone) })}
				</span>
			)}
		</>
	);
}

/** One press for what is suggested; any other code from the list. */
function CodeForms({ row }: { row: CodingRow }) {
	const { t, i18n } = useTranslation("checks");
	const { choices, suggested, codes, words } = row;
	const nameOf = (key: string) => wordsIn(choices.find((one) => one.key === key)!.text, i18n.language);
	const id = `code ${row.responseId} ${row.questionKey} ${row.plantingId}`;
	return (
		<div className="grid gap-2">
			{suggested.length > 0 && (
				<Form method="post" className="flex flex-wrap items-center gap-2">
					<Place row={row} />
					<span className="text-quiet">{t("coding.suggested")}:</span>
					{suggested.map((key) => (
						<Button
							key={key}
							kind="secondary"
							size="small"
							name="code"
							value={key}
							aria-label={t("coding.give", { words, code: nameOf(key) })}
						>
							{nameOf(key)}
						</Button>
					))}
				</Form>
			)}
			<Form method="post" className="flex flex-wrap items-center gap-2">
				<Place row={row} />
				<label htmlFor={id} className="sr-only">
					{t("coding.giveCode", { words })}
				</label>
				<select
					id={id}
					name="code"
					defaultValue={codes?.[0] ?? ""}
					className="min-h-11 max-w-full rounded-plat border border-field bg-paper px-3 py-2 text-ink"
				>
					<option value="">{t("coding.other")}</option>
					{choices.map(({ key, text }) => (
						<option key={key} value={key}>
							{wordsIn(text, i18n.language)}
						</option>
					))}
				</select>
				<Button kind="secondary" size="small">
					{t("coding.save")}
				</Button>
			</Form>
		</div>
	);
}

function Place({ row: { responseId, questionKey, plantingId, seen } }: { row: CodingRow }) {
	return (
		<>
			<input type="hidden" name="responseId" value={responseId} />
			<input type="hidden" name="questionKey" value={questionKey} />
			{plantingId && <input type="hidden" name="plantingId" value={plantingId} />}
			<input type="hidden" name="seen" value={seen} />
		</>
	);
}

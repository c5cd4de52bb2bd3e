import { useTranslation } from "react-i18next";
import { data, Form, href, Link, redirect } from "react-router";
import type { Route } from "./+types/checks";
import { requireAssociate } from "#app/auth/guard.server.ts";
import { sessionContext } from "#app/auth/session.server.ts";
import { Button } from "#app/components/button.tsx";
import { classes } from "#app/components/classes.ts";
import { Confirm } from "#app/components/confirm.tsx";
import { KeyPaging } from "#app/components/key-paging.tsx";
import { NotDone, Notice } from "#app/components/notice.tsx";
import { useFormat } from "#app/i18n/use-format.ts";
import { queueSurveyCheck } from "#app/jobs/check-answers.server.ts";
import { parseForm } from "#app/lib/parse-form.ts";
import { refusal } from "#app/lib/refusal.ts";
import { BulkDecision, FindingsQuery } from "#app/review/findings.schema.ts";
import { findSurvey } from "#app/collect/surveys.server.ts";
import { confirmChosen, undoBatch } from "./parts/checks/decide.server.ts";
import { QueueFilters } from "./parts/checks/queue-filters.tsx";
import { readQueue } from "./parts/checks/queue.server.ts";
import { QueueTable } from "./parts/checks/queue-table.tsx";

export async function loader({ context, params, request }: Route.LoaderArgs) {
	const desk = requireAssociate(context);
	const query = FindingsQuery.parse(Object.fromEntries(new URL(request.url).searchParams));
	const queue = await desk.transaction((trx) => readQueue(trx, desk.viewer, params.surveyId, query));
	if (!queue) throw refusal("survey_not_found");
	return queue;
}

/** Confirms what was chosen, takes that back, or has the whole survey gone through again. */
export async function action({ context, params, request }: Route.ActionArgs) {
	const desk = requireAssociate(context);
	const form = parseForm(BulkDecision, await request.formData());
	if (!form.ok) throw refusal("form_not_understood");
	const { value: decision } = form;
	const { surveyId } = params;
	const session = context.get(sessionContext);
	const page = new URL(request.url);
	const back = (search: URLSearchParams) => redirect(`${page.pathname}${search.size > 0 ? `?${search}` : ""}`, 303);
	page.searchParams.delete("batch");
	if (decision.act === "confirm") {
		if (decision.chosen.length === 0) return data({ problem: "none_chosen" as const }, { status: 400 });
		const done = await desk.transaction((trx) => confirmChosen(trx, desk.viewer, surveyId, decision.chosen));
		if (done === "not_found") throw refusal("survey_not_found");
		const key = done.left > 0 ? "checks:toast.someConfirmed" : "checks:toast.confirmedAll";
		session.flash("toast", { key, values: { count: done.confirmed } });
		if (done.confirmed > 0) page.searchParams.set("batch", done.batchId);
		return back(page.searchParams);
	}
	if (decision.act === "undo") {
		const done = await desk.transaction((trx) => undoBatch(trx, desk.viewer, surveyId, decision.batch));
		if (done === "not_found") throw refusal("survey_not_found");
		session.flash("toast", { key: "checks:toast.undone", values: { count: done.reopened } });
		return back(page.searchParams);
	}
	const found = await desk.transaction(async (trx) => {
		const survey = await findSurvey(trx, desk.viewer, surveyId);
		if (survey) await queueSurveyCheck(trx, surveyId);
		return survey;
	});
	if (!found) throw refusal("survey_not_found");
	session.flash("toast", { key: "checks:toast.checkingAgain" });
	return back(page.searchParams);
}

/** What is odd about the answers of a survey, and what became of it. */
export default function Checks({ loaderData, actionData, params }: Route.ComponentProps) {
	const { query, rows, open, before, after, total, moreThanTotal, undoable } = loaderData;
	const { t } = useTranslation("checks");
	const format = useFormat();
	return (
		<>
			<p className="max-w-prose">{t("queue.lead")}</p>
			{actionData?.problem && (
				<NotDone tone="attention" answer={actionData}>
					{t("queue.noneChosen")}
				</NotDone>
			)}
			{undoable > 0 && query.batch && <Undo count={undoable} batch={query.batch} />}
			<Shown show={query.show} open={format.number(open)} surveyId={params.surveyId} />
			<QueueFilters {...loaderData} />
			<Form method="post">
				<QueueTable {...loaderData} surveyId={params.surveyId} />
				{query.show === "open" && rows.length > 0 && (
					<div className="no-print mt-4 flex flex-wrap gap-4">
						<Confirm
							trigger={t("queue.confirm.button")}
							title={t("queue.confirm.title")}
							body={t("queue.confirm.body")}
							confirmLabel={t("queue.confirm.button")}
							name="act"
							value="confirm"
						/>
					</div>
				)}
			</Form>
			{total > 0 && <KeyPaging before={before} after={after} total={total} moreThanTotal={moreThanTotal} />}
			{!loaderData.isDraft && (
				<Form method="post" className="no-print mt-8">
					<Button kind="quiet" name="act" value="check_again">
						{t("queue.checkAgain")}
					</Button>
				</Form>
			)}
		</>
	);
}

function Undo({ count, batch }: { count: number; batch: string }) {
	const { t } = useTranslation("checks");
	return (
		<Notice tone="info">
			<Form method="post" className="flex flex-wrap items-center gap-4">
				<p>{t("queue.justConfirmed", { count })}</p>
				<input type="hidden" name="batch" value={batch} />
				<Button kind="secondary" size="small" name="act" value="undo">
					{t("queue.undo")}
				</Button>
			</Form>
		</Notice>
	);
}

/** The two halves of the queue, side by side. */
function Shown({ show, open, surveyId }: { show: FindingsQuery["show"]; open: string; surveyId: string }) {
	const { t } = useTranslation("checks");
	const to = href("/desk/surveys/:surveyId/checks", { surveyId });
	return (
		<nav aria-label={t("queue.halves")} className="no-print mb-4 mt-4 flex flex-wrap gap-x-6 gap-y-1">
			{(["open", "ended"] as const).map((half) => (
				<Link
					key={half}
					to={half === "open" ? to : `${to}?show=ended&sort=made`}
					aria-current={half === show ? "page" : undefined}
					className={classes("inline-flex min-h-11 items-center", half === show && "font-bold text-ink no-underline")}
				>
					{half === "open" ? t("queue.openHalf", { value: open }) : t("queue.endedHalf")}
				</Link>
			))}
			<Link to={href("/desk/surveys/:surveyId/coding", { surveyId })} className="inline-flex min-h-11 items-center">
				{t("queue.toCoding")}
			</Link>
		</nav>
	);
}

import { useTranslation } from "react-i18next";
import { data, Form } from "react-router";
import { z } from "zod";
import type { Route } from "./+types/check-answer";
import { countWrongLink } from "#app/auth/link-tries.server.ts";
import { scopedTransaction } from "#app/auth/scope.server.ts";
import { partOf } from "#app/collect/personal-link.server.ts";
import { AnswerText } from "#app/components/answer-list.tsx";
import { Button } from "#app/components/button.tsx";
import { DescriptionList } from "#app/components/description-list.tsx";
import { ErrorSummary } from "#app/components/error-summary.tsx";
import { Page } from "#app/components/page.tsx";
import { TextField } from "#app/components/text-field.tsx";
import { wordsIn } from "#app/i18n/language.ts";
import { speakLikeMail } from "#app/i18n/middleware.server.ts";
import { parseForm } from "#app/lib/parse-form.ts";
import { refusal } from "#app/lib/refusal.ts";
import { findAskedBy, replyToQuestion } from "#app/review/edit-question.server.ts";
import { useAboutLabel } from "../desk/parts/checks/about-label.ts";
import { plantingsById, showAnswer } from "../desk/parts/checks/queue.server.ts";

export const handle = { bare: true };

/** Looks only, for mail scanners open links too; a forwarded link shows no whole name. */
export async function loader({ context, params, request }: Route.LoaderArgs) {
	const found = await scopedTransaction({ kind: "network" }, async (trx) => {
		const asked = await findAskedBy(trx, params.token);
		return asked && { asked, plantings: await plantingsById(trx, [asked]) };
	});
	if (!found) throw await refused(request);
	const { asked, plantings } = found;
	await speakLikeMail(context, request, asked.responseLanguage);
	return {
		title: asked.title,
		season: asked.season,
		operation: partOf(asked.operationName),
		answers: asked.about.flatMap((answer) => showAnswer(asked.definition, answer, plantings) ?? []),
		reply: asked.reply,
		isOpen: asked.isOpen,
	};
}

/** One answer for every link that asks nothing, until somebody has tried too many of them. */
async function refused(request: Request) {
	return refusal((await countWrongLink(request)) ? "link_not_valid" : "too_many_tries");
}

const Reply = z.object({
	reply: z.enum(["right", "wrong"]),
	words: z.string().trim().max(2000, "too_long").default(""),
});

export async function action({ params, request }: Route.ActionArgs) {
	const form = parseForm(Reply, await request.formData());
	if (!form.ok && form.problems.some(({ field }) => field !== "words")) throw refusal("form_not_understood");
	const found = await scopedTransaction({ kind: "network" }, async (trx) => {
		const asked = await findAskedBy(trx, params.token);
		if (asked?.isOpen && form.ok) await replyToQuestion(trx, asked, form.value);
		return asked;
	});
	if (!found) throw await refused(request);
	if (!form.ok) return data({ problems: form.problems, values: form.values }, { status: 400 });
	return data({ problems: [], values: {} });
}

/** One question about one answer; a press answers it. */
export default function CheckAnswer({ loaderData, actionData }: Route.ComponentProps) {
	const { t, i18n } = useTranslation("checks");
	const label = useAboutLabel();
	const { title, season, operation, answers, reply, isOpen } = loaderData;
	const survey = t("desk:surveys.name", { title: wordsIn(title, i18n.language), season });
	const told = (
		<DescriptionList
			items={answers.map((answer) => ({ term: label(answer), detail: <AnswerText shown={answer.shown} /> }))}
		/>
	);
	if (reply || !isOpen) {
		const said = reply ?? "decided";
		return (
			<Page title={t(`ask.done.${said}.title`)} lead={t(`ask.done.${said}.lead`)}>
				{told}
			</Page>
		);
	}
	const typed = actionData?.values as { words?: string } | undefined;
	return (
		<Page title={t("ask.title")} lead={t("ask.lead", { survey, operation })}>
			<ErrorSummary problems={actionData?.problems} labels={{}} />
			{told}
			<Form method="post" className="mt-6">
				<Button name="reply" value="right">
					{t("ask.right")}
				</Button>
			</Form>
			<Form method="post" className="mt-8">
				<TextField
					name="words"
					label={t("ask.words")}
					help={t("ask.wordsHelp")}
					optional
					multiline
					rows={3}
					maxLength={2000}
					defaultValue={typed?.words}
					problem={actionData?.problems.find(({ field }) => field === "words")}
				/>
				<Button kind="secondary" name="reply" value="wrong">
					{t("ask.wrong")}
				</Button>
			</Form>
			<p className="mt-6 text-base text-quiet">{t("ask.nothingElse")}</p>
		</Page>
	);
}

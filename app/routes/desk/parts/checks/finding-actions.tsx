import { useTranslation } from "react-i18next";
import { Form, Link } from "react-router";
import type { StepValues } from "#app/collect/posted.ts";
import { Button, ButtonLink } from "#app/components/button.tsx";
import { Confirm } from "#app/components/confirm.tsx";
import { ErrorSummary } from "#app/components/error-summary.tsx";
import { Section } from "#app/components/section.tsx";
import { TextField } from "#app/components/text-field.tsx";
import { useFormat } from "#app/i18n/use-format.ts";
import type { Problem } from "#app/lib/parse-form.ts";
import { mustBeAnswered } from "./must-be-answered.ts";
import { labelOf, QuestionField } from "../../../grower/parts/question-field.tsx";
import { useAboutLabel } from "./about-label.ts";
import type { FindingView } from "./finding-view.server.ts";

export type Mode = { act: "correct" | "set_aside" | null; at: number };
type Sent = { values: Record<string, string[]>; problems: Problem[] } | undefined;
type Props = { view: FindingView; mode: Mode; sent: Sent };

/** What an associate can do: one form at a time, each at an address of its own, so that all of it works without scripts. */
export function FindingActions(props: Props) {
	const { view, mode } = props;
	const { t } = useTranslation("checks");
	const { outcome } = view.finding;
	if (outcome === "answer_changed" || outcome === "not_odd") return null;
	return (
		<Section title={t(outcome ? "act.endedTitle" : "act.title")} id="act">
			{outcome ? <Reopen view={view} /> : mode.act ? <CloseForm {...props} /> : <Choices {...props} />}
		</Section>
	);
}

function Version({ view }: { view: FindingView }) {
	return <input type="hidden" name="version" value={view.finding.version} />;
}

function Reopen({ view }: { view: FindingView }) {
	const { t } = useTranslation("checks");
	return (
		<Form method="post">
			<Version view={view} />
			<Confirm
				trigger={t("act.reopen.button")}
				title={t("act.reopen.title")}
				body={t("act.reopen.body")}
				confirmLabel={t("act.reopen.button")}
				name="act"
				value="reopen"
			/>
		</Form>
	);
}

function Choices({ view, sent }: Props) {
	const { t } = useTranslation("checks");
	const label = useAboutLabel();
	const correctable = view.answers.flatMap((answer, at) =>
		answer.question && answer.now && answer.asFound ? [{ at, name: label(answer.asFound) }] : [],
	);
	const problem = sent?.problems.find(({ field }) => field === "words");
	return (
		<>
			<ErrorSummary problems={sent?.problems} labels={{ words: t("act.words") }} />
			<Form method="post">
				<Version view={view} />
				<TextField
					name="words"
					label={t("act.words")}
					help={t("act.wordsHelp")}
					optional
					multiline
					rows={2}
					maxLength={2000}
					problem={problem}
					defaultValue={sent?.values.words?.[0]}
				/>
				<Button name="act" value="confirm">
					{t("act.confirm")}
				</Button>
			</Form>
			<div className="mt-6 flex flex-wrap gap-3">
				{correctable.map(({ at, name }) => (
					<ButtonLink key={at} kind="secondary" preventScrollReset to={`?do=correct&at=${at}`}>
						{t("act.correctOne", { label: name })}
					</ButtonLink>
				))}
				{correctable.map(({ at, name }) => (
					<ButtonLink key={at} kind="secondary" preventScrollReset to={`?do=set_aside&at=${at}`}>
						{t("act.setAsideOne", { label: name })}
					</ButtonLink>
				))}
				<Ask view={view} />
			</div>
		</>
	);
}

function Ask({ view }: { view: FindingView }) {
	const { t } = useTranslation("checks");
	const format = useFormat();
	const { askedAt, timeZone } = view.finding;
	if (askedAt) return <p className="text-quiet">{t("act.asked", { moment: format.moment(askedAt, timeZone) })}</p>;
	return (
		<Form method="post">
			<Version view={view} />
			<Confirm
				trigger={t("act.ask.button")}
				title={t("act.ask.title")}
				body={t("act.ask.body")}
				confirmLabel={t("act.ask.confirm")}
				name="act"
				value="ask"
			/>
		</Form>
	);
}

/** Corrects one answer, or sets it aside. */
function CloseForm({ view, mode, sent }: Props) {
	const { t, i18n } = useTranslation("checks");
	const label = useAboutLabel();
	const answer = view.answers[mode.at]!;
	const { question, asFound } = answer;
	const called = asFound ? label(asFound) : "";
	const corrects = mode.act === "correct" && question !== null;
	const values: StepValues = Object.fromEntries(
		Object.entries(sent?.values ?? {}).map(([name, all]) => [name, all.length === 1 ? all[0]! : all]),
	);
	const problems = sent?.problems ?? [];
	const labels = { reason: t("act.reason"), ...(question && { [question.key]: labelOf(question, i18n.language) }) };
	return (
		<>
			<ErrorSummary problems={problems} labels={labels} />
			<Form method="post">
				<Version view={view} />
				<input type="hidden" name="at" value={mode.at} />
				<input type="hidden" name="seen" value={answer.seen} />
				<p className="mb-4 font-bold">{t(corrects ? "act.correctOne" : "act.setAsideOne", { label: called })}</p>
				{corrects && (
					<QuestionField
						question={mustBeAnswered(question)}
						planting={answer.planting}
						values={values}
						problems={problems}
						mayNotKnow
						photoHref={(photoId) => photoId}
					/>
				)}
				{!corrects && <p className="mb-4 max-w-prose">{t("act.setAsideWhat")}</p>}
				<TextField
					name="reason"
					label={t("act.reason")}
					help={t("act.reasonHelp")}
					multiline
					rows={2}
					maxLength={2000}
					problem={problems.find(({ field }) => field === "reason")}
					defaultValue={sent?.values.reason?.[0]}
				/>
				<div className="flex flex-wrap items-center gap-4">
					<Button name="act" value={corrects ? "correct" : "set_aside"}>
						{t(corrects ? "act.correct" : "act.setAside")}
					</Button>
					{corrects && (
						<Button kind="secondary" name="act" value="preview">
							{t("act.preview")}
						</Button>
					)}
					<Link to="?" preventScrollReset className="inline-flex min-h-11 items-center">
						{t("act.back")}
					</Link>
				</div>
			</Form>
		</>
	);
}

const hidden = new Set(["act", "version", "at", "seen"]);

/** What was sent in vain, to be read and copied. */
export function TypedBefore({ values }: { values: Record<string, string[]> }) {
	const { t } = useTranslation("checks");
	const typed = Object.entries(values).filter(([name, all]) => !hidden.has(name) && all.some((one) => one !== ""));
	if (typed.length === 0) return null;
	return <p className="mt-2">{t("refused.typed", { typed: typed.flatMap(([, all]) => all).join(" · ") })}</p>;
}

import { useTranslation } from "react-i18next";
import { Form, href, Link, redirect } from "react-router";
import { z } from "zod";
import type { Route } from "./+types/own-answers";
import { requireOrchard } from "#app/auth/guard.server.ts";
import { sessionContext } from "#app/auth/session.server.ts";
import { findOwnAnswers } from "#app/collect/own-answers.server.ts";
import { withdrawAnswer } from "#app/collect/withdrawal.server.ts";
import { AnswerList } from "#app/components/answer-list.tsx";
import { ButtonLink } from "#app/components/button.tsx";
import { Confirm } from "#app/components/confirm.tsx";
import { DescriptionList } from "#app/components/description-list.tsx";
import { Notice } from "#app/components/notice.tsx";
import { Page } from "#app/components/page.tsx";
import { Section } from "#app/components/section.tsx";
import { wordsIn } from "#app/i18n/language.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import { refusal } from "#app/lib/refusal.ts";
import { BackToOrchard } from "./parts/back-to-orchard.tsx";

const Version = z.coerce.number().int().optional().catch(undefined);

export async function loader({ context, params, request }: Route.LoaderArgs) {
	const grower = requireOrchard(context);
	const version = Version.parse(new URL(request.url).searchParams.get("version") ?? undefined);
	const answers = await grower.transaction((trx) => findOwnAnswers(trx, grower.viewer, params, version));
	if (!answers) throw refusal("orchard_not_found");
	return answers;
}

/** Takes the answers back. Where a release came first, the page says why it no longer can. */
export async function action({ context, params }: Route.ActionArgs) {
	const grower = requireOrchard(context);
	const outcome = await grower.transaction((trx) => withdrawAnswer(trx, grower.viewer, params));
	if (outcome === "not_found" || outcome === "not_sent") throw refusal("orchard_not_found");
	if (outcome !== "released") context.get(sessionContext).flash("toast", { key: "orchard:answers.withdraw.done" });
	return redirect(href("/orchard/:operationId/answers/:surveyId", params), 303);
}

type Answers = Route.ComponentProps["loaderData"];

export default function OwnAnswers({ loaderData: answers, params }: Route.ComponentProps) {
	const { t, i18n } = useTranslation("orchard");
	const { title, season, operationName, receiptCode, isOpen, withdrawnAt } = answers;
	return (
		<Page
			title={t("answers.title", { survey: wordsIn(title, i18n.language), season })}
			lead={t("answers.lead", { operation: operationName })}
		>
			<BackToOrchard />
			{withdrawnAt && <IsWithdrawn answers={answers} />}
			<DescriptionList
				items={[
					...(receiptCode ? [{ term: t("answers.receipt"), detail: receiptCode }] : []),
					{ term: t("answers.sentIn"), detail: <Versions answers={answers} /> },
				]}
			/>
			{isOpen && (
				<div className="no-print mt-6">
					<ButtonLink kind="secondary" to={href("/answer/:surveyId/:operationId", params)} reloadDocument>
						{t(withdrawnAt ? "home.again" : "answers.change")}
					</ButtonLink>
				</div>
			)}
			<Section title={t("answers.yours")}>
				<AnswerList
					groups={answers.groups}
					level={3}
					photoHref={(photoId) =>
						href("/orchard/:operationId/answers/:surveyId/photos/:photoId", { ...params, photoId })
					}
				/>
			</Section>
			{answers.withdrawal && <Withdrawal possible={answers.withdrawal === "possible"} />}
		</Page>
	);
}

function IsWithdrawn({ answers: { withdrawnAt, timeZone, isOpen } }: { answers: Answers }) {
	const { t } = useTranslation("orchard");
	const format = useFormat();
	if (!withdrawnAt) return null;
	return (
		<Notice tone="info" title={t("answers.withdrawnTitle", { day: format.dayOf(withdrawnAt, timeZone) })}>
			<p>
				{t("answers.withdrawn")} {isOpen && t("answers.withdrawnOpen")}
			</p>
		</Notice>
	);
}

/** Each time the answers were sent in, newest first; the one that is shown stands out. */
function Versions({ answers: { submissions, shownVersion, timeZone } }: { answers: Answers }) {
	const { t } = useTranslation("orchard");
	const format = useFormat();
	return (
		<ul className="list-none">
			{submissions.map(({ version, submittedAt, late, withdrawnAt }) => {
				const moment = format.moment(submittedAt, timeZone);
				const kind = withdrawnAt ? "versionWithdrawn" : late ? "versionLate" : null;
				const words = kind ? t(`answers.${kind}`, { moment }) : moment;
				if (version !== shownVersion)
					return (
						<li key={version}>
							<Link to={`?version=${version}`} preventScrollReset className="inline-flex min-h-11 items-center">
								{words}
							</Link>
						</li>
					);
				return (
					<li key={version}>
						{submissions.length > 1 ? <strong>{t("answers.shown", { version: words })}</strong> : words}
					</li>
				);
			})}
		</ul>
	);
}

function Withdrawal({ possible }: { possible: boolean }) {
	const { t } = useTranslation("orchard");
	return (
		<Section title={t("answers.withdraw.title")}>
			<p className="mb-4">{t(possible ? "answers.withdraw.lead" : "answers.withdraw.released")}</p>
			{possible && (
				<Form method="post">
					<Confirm
						danger
						trigger={t("answers.withdraw.button")}
						title={t("answers.withdraw.question")}
						body={t("answers.withdraw.body")}
						confirmLabel={t("answers.withdraw.confirm")}
					/>
				</Form>
			)}
		</Section>
	);
}

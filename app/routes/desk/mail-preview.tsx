import { useTranslation } from "react-i18next";
import { data, Form, href, Link, redirect } from "react-router";
import type { Route } from "./+types/mail-preview";
import { requireAssociate } from "#app/auth/guard.server.ts";
import { sessionContext } from "#app/auth/session.server.ts";
import { Button } from "#app/components/button.tsx";
import { DescriptionList } from "#app/components/description-list.tsx";
import { Notice } from "#app/components/notice.tsx";
import { Section } from "#app/components/section.tsx";
import { languages } from "#app/i18n/language.ts";
import { queueJob } from "#app/jobs/queue.server.ts";
import { readSample } from "./parts/sample.server.ts";
import { lookAgain } from "#app/lib/look-again.ts";

export async function loader({ context, params, request }: Route.LoaderArgs) {
	const desk = requireAssociate(context);
	const { kind, language, mail } = await readSample(desk, request, params);
	return { kind, language, subject: mail.subject, text: mail.text, ownAddress: desk.viewer.email };
}

/** Sends the sample to whoever looks at it. */
export async function action({ context, params, request }: Route.ActionArgs) {
	const desk = requireAssociate(context);
	const { kind, language } = await readSample(desk, request, params);
	const { personId, email } = desk.viewer;
	if (!email) return data({ refused: "no_address" as const }, { status: 409 });
	const jobKey = `send_sample:${personId}:${params.surveyId}:${kind}:${language}`;
	await desk.transaction((trx) =>
		queueJob(trx, "send_sample", { surveyId: params.surveyId, personId, kind, language }, { jobKey, maxAttempts: 3 }),
	);
	context.get(sessionContext).flash("toast", { key: "desk:mailing.toast.sample", values: { email } });
	return redirect(`${href("/desk/surveys/:surveyId/mailing/:kind", params)}?in=${language}`, 303);
}

export const shouldRevalidate = lookAgain;

export default function MailPreview({ loaderData, actionData, params }: Route.ComponentProps) {
	const { t } = useTranslation("desk");
	const { kind, language, subject, text, ownAddress } = loaderData;
	const here = href("/desk/surveys/:surveyId/mailing/:kind", params);
	return (
		<>
			<p className="no-print mb-4">
				<Link to={href("/desk/surveys/:surveyId/mailing", params)}>{t("mailing.back")}</Link>
			</p>
			<Section title={t("mailing.previewOf", { kind: t(`mailing.kind.${kind}`) })}>
				<p className="mb-4 max-w-prose">{t("mailing.invented")}</p>
				{actionData && <Notice tone="attention">{t("mailing.noOwnAddress")}</Notice>}
				<nav aria-label={t("mailing.language")} className="mb-4">
					<ul className="flex gap-6">
						{languages.map((other) => (
							<li key={other}>
								<Link
									to={`${here}?in=${other}`}
									aria-current={other === language ? "page" : undefined}
									className="inline-flex min-h-11 items-center aria-[current=page]:font-bold"
								>
									{t(`common:language.${other}`)}
								</Link>
							</li>
						))}
					</ul>
				</nav>
				<DescriptionList items={[{ term: t("mailing.subject"), detail: <span lang={language}>{subject}</span> }]} />
				<iframe
					title={t("mailing.asHtml")}
					src={`${here}/html?in=${language}`}
					sandbox=""
					className="mt-4 h-[44rem] w-full max-w-2xl border border-line"
				/>
				<details className="mt-4">
					<summary className="min-h-11 cursor-pointer py-2 font-bold text-damson">{t("mailing.asText")}</summary>
					<pre lang={language} className="max-w-2xl border border-rule p-4 text-sm wrap-anywhere whitespace-pre-wrap">
						{text}
					</pre>
				</details>
				<Form method="post" action={`${here}?in=${language}`} className="mt-6">
					{ownAddress ? (
						<Button kind="secondary">{t("mailing.toMyself", { email: ownAddress })}</Button>
					) : (
						<p>{t("mailing.noOwnAddress")}</p>
					)}
				</Form>
			</Section>
		</>
	);
}

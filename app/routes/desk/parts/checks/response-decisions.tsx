import { useTranslation } from "react-i18next";
import { href, Link } from "react-router";
import { AnswerText } from "#app/components/answer-list.tsx";
import { DataTable } from "#app/components/data-table.tsx";
import { Section } from "#app/components/section.tsx";
import { wordsIn } from "#app/i18n/language.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import { useAboutLabel } from "./about-label.ts";
import type { ResponseDecision } from "./response-decisions.server.ts";

type ResponseDecisionsProps = { decisions: ResponseDecision[]; surveyId: string; timeZone: string };

/** What counts in the place of a grower's answers, above the answers as they were told. */
export function ResponseDecisions({ decisions, surveyId, timeZone }: ResponseDecisionsProps) {
	const { t } = useTranslation("checks");
	const format = useFormat();
	const label = useAboutLabel();
	if (decisions.length === 0) return null;
	return (
		<Section title={t("response.title")} level={3}>
			<p className="mb-3 max-w-prose">{t("response.lead")}</p>
			<DataTable
				caption={t("response.title")}
				captionHidden
				rows={decisions}
				rowKey={({ number }) => String(number)}
				columns={[
					{ key: "question", header: t("finding.question"), cell: ({ told }) => label(told) },
					{ key: "own", header: t("finding.own"), cell: ({ told }) => <AnswerText shown={told.shown} /> },
					{ key: "put", header: t("response.put"), cell: (row) => <Put decision={row} /> },
					{
						key: "who",
						header: t("response.who"),
						cell: ({ madeBy, madeAt, reason, findingId }) => (
							<>
								{madeBy} <span className="text-quiet">{format.moment(madeAt, timeZone)}</span>
								{reason && <span className="block whitespace-pre-line">{t("history.words", { words: reason })}</span>}
								{findingId && (
									<Link
										to={href("/desk/surveys/:surveyId/checks/:findingId", { surveyId, findingId })}
										className="inline-flex min-h-6 items-center"
									>
										{t("response.finding")}
									</Link>
								)}
							</>
						),
					},
				]}
			/>
		</Section>
	);
}

function Put({ decision: { act, put, codes } }: { decision: ResponseDecision }) {
	const { t, i18n } = useTranslation("checks");
	const format = useFormat();
	if (act === "set_aside") return <strong>{t("response.setAside")}</strong>;
	if (put) return <AnswerText shown={put.shown} />;
	const names = codes.map((words) => wordsIn(words, i18n.language));
	return t("response.coded", { codes: names.length > 0 ? format.list(names) : t("coding.other") });
}

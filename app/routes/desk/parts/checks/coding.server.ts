import { z } from "zod";
import { logEvent } from "#app/auth/event-log.server.ts";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { findSurveyForm } from "#app/collect/forms.server.ts";
import { findSurvey, isId } from "#app/collect/surveys.server.ts";
import { besideParts } from "#app/lib/page-by-key.ts";
import { codedQuestionsOf, codesOf, suggestCodes } from "#app/review/coding.ts";
import { countToldInWords, listToldInWords, listWordsOfResponse } from "#app/review/coding.server.ts";
import { decidedElsewhere } from "#app/review/corrections.server.ts";
import { addCorrection, lockForDecision } from "#app/review/decisions.server.ts";
import { takeIn } from "./decide.server.ts";

export const CodingQuery = z.object({
	show: z.enum(["open", "done"]).catch("open"),
	...besideParts,
});
export type CodingQuery = z.infer<typeof CodingQuery>;

/** `code` empty: the words stay something else. */
export const Coding = z.object({
	responseId: z.guid(),
	questionKey: z.string().regex(/^[a-z][a-z0-9_]{0,80}$/),
	plantingId: z.guid().optional(),
	seen: z.coerce.number().int().min(0),
	code: z
		.string()
		.regex(/^[a-z][a-z0-9_]{0,80}$/)
		.optional(),
});
export type Coding = z.infer<typeof Coding>;

/** A page of what was told in words, with the codes of each and what is suggested. */
export async function readCoding(trx: Trx, viewer: Associate, surveyId: string, query: CodingQuery) {
	const asked = await readQuestions(trx, viewer, surveyId);
	if (!asked) return undefined;
	const { questions, questionKeys, definition } = asked;
	const { open, done, coded } = await countToldInWords(trx, viewer, surveyId, questionKeys);
	const page = await listToldInWords(trx, viewer, surveyId, { ...query, questionKeys });
	const rows = page.rows.map((one) => {
		const question = questions.find(({ key }) => key === one.questionKey)!;
		const choices = codesOf(definition, question, one.cropKey);
		return { ...one, choices, suggested: one.codes === null ? suggestCodes(one.words, choices, coded) : [] };
	});
	return { ...page, rows, total: query.show === "open" ? open : done, open, asks: questions.length > 0, query };
}
export type CodingRow = NonNullable<Awaited<ReturnType<typeof readCoding>>>["rows"][number];

async function readQuestions(trx: Trx, viewer: Associate, surveyId: string) {
	const survey = await findSurvey(trx, viewer, surveyId);
	const definition = survey && (await findSurveyForm(trx, surveyId));
	if (!definition) return undefined;
	const questions = codedQuestionsOf(definition);
	return { definition, questions, questionKeys: questions.map(({ key }) => key) };
}

/**
 * Gives words a code, or says that they stay something else; facts and tallies follow at once. Sent twice, it says the same.
 * @returns `changed` where somebody else coded them, or the grower wrote anew, after the page was opened; `changed_by_you` where
 * the same person did in another window.
 */
export async function giveCode(
	trx: Trx,
	viewer: Associate,
	surveyId: string,
	{
		responseId,
		questionKey,
		plantingId = null,
		seen,
		code,
	}: Omit<Coding, "plantingId"> & { plantingId?: string | null },
): Promise<"coded" | "uncoded" | "changed" | "changed_by_you" | "not_found"> {
	if (!isId(surveyId)) return "not_found";
	// The viewer's scope holds no row of another state, so this waits for none; what is read then nobody changes meanwhile.
	await lockForDecision(trx, surveyId, responseId);
	const read = await readQuestions(trx, viewer, surveyId);
	if (!read) return "not_found";
	const told = await listWordsOfResponse(trx, viewer, surveyId, { questionKeys: read.questionKeys, responseId });
	const held = told.find((one) => one.questionKey === questionKey && one.plantingId === plantingId);
	const question = read.questions.find(({ key }) => key === questionKey);
	if (!held || !question) return "not_found";
	const choices = codesOf(read.definition, question, held.cropKey);
	if (code !== undefined && !choices.some(({ key }) => key === code)) return "not_found";
	const codes = code === undefined ? [] : [code];
	const outcome = code === undefined ? "uncoded" : "coded";
	if (JSON.stringify(held.codes) === JSON.stringify(codes)) return outcome;
	if (held.seen !== seen) {
		const isOwn = await decidedElsewhere(trx, viewer, { responseId, questionKey, plantingId, seen });
		return isOwn ? "changed_by_you" : "changed";
	}
	await addCorrection(trx, viewer, {
		responseId,
		questionKey,
		plantingId,
		editFindingId: null,
		act: "coded",
		was: { kind: "given", value: held.words },
		answer: { codes },
		reason: "",
	});
	await logEvent(trx, {
		personId: viewer.personId,
		action: "finding.coded",
		subjectKind: "response",
		subjectId: responseId,
		stateFips: held.stateFips,
		detail: { surveyId, operationId: held.operationId, code: code ?? null },
	});
	await takeIn(trx, surveyId, responseId);
	return outcome;
}

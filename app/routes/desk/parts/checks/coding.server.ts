import { z } from "zod";
import { logEvent } from "#app/auth/event-log.server.ts";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { findSurveyForm } from "#app/collect/forms.server.ts";
import { findSurvey, isId } from "#app/collect/surveys.server.ts";
import { codedQuestionsOf, codesOf, suggestCodes } from "#app/review/coding.ts";
import { listToldInWords } from "#app/review/coding.server.ts";
import { addCorrection, lockForDecision } from "#app/review/decisions.server.ts";
import { takeIn } from "./decide.server.ts";

export const CodingQuery = z.object({
	show: z.enum(["open", "done"]).catch("open"),
	page: z.coerce.number().int().min(1).max(100_000).catch(1),
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

const pageSize = 50;

/** A page of what was told in words, with the codes of each and what is suggested. */
export async function readCoding(trx: Trx, viewer: Associate, surveyId: string, query: CodingQuery) {
	const read = await readWords(trx, viewer, surveyId);
	if (!read) return undefined;
	const { questions, definition, told } = read;
	const before = told.flatMap(({ words, codes }) => (codes && codes.length > 0 ? [{ words, codes }] : []));
	const chosen = told.filter(({ codes }) => (query.show === "open") === (codes === null));
	const pageCount = Math.max(1, Math.ceil(chosen.length / pageSize));
	const page = Math.min(query.page, pageCount);
	const rows = chosen.slice((page - 1) * pageSize, page * pageSize).map((one) => {
		const question = questions.find(({ key }) => key === one.questionKey)!;
		const choices = codesOf(definition, question, one.cropKey);
		return { ...one, choices, suggested: one.codes === null ? suggestCodes(one.words, choices, before) : [] };
	});
	const open = told.filter(({ codes }) => codes === null).length;
	return { rows, page, pageCount, total: chosen.length, open, asks: questions.length > 0, query };
}
export type CodingRow = NonNullable<Awaited<ReturnType<typeof readCoding>>>["rows"][number];

async function readWords(trx: Trx, viewer: Associate, surveyId: string) {
	const survey = await findSurvey(trx, viewer, surveyId);
	const definition = survey && (await findSurveyForm(trx, surveyId));
	if (!definition) return undefined;
	const questions = codedQuestionsOf(definition);
	const keys = questions.map(({ key }) => key);
	return { definition, questions, told: await listToldInWords(trx, viewer, surveyId, keys) };
}

/**
 * Gives words a code, or says that they stay something else; facts and tallies follow at once. Sent twice, it says the same.
 * @returns `changed` where somebody else coded them, or the grower wrote anew, after the page was opened.
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
): Promise<"coded" | "uncoded" | "changed" | "not_found"> {
	if (!isId(surveyId)) return "not_found";
	// The viewer's scope holds no row of another state, so this waits for none; what is read then nobody changes meanwhile.
	await lockForDecision(trx, surveyId, responseId);
	const read = await readWords(trx, viewer, surveyId);
	const held = read?.told.find(
		(told) => told.responseId === responseId && told.questionKey === questionKey && told.plantingId === plantingId,
	);
	const question = read?.questions.find(({ key }) => key === questionKey);
	if (!read || !held || !question) return "not_found";
	const choices = codesOf(read.definition, question, held.cropKey);
	if (code !== undefined && !choices.some(({ key }) => key === code)) return "not_found";
	const codes = code === undefined ? [] : [code];
	const outcome = code === undefined ? "uncoded" : "coded";
	if (JSON.stringify(held.codes) === JSON.stringify(codes)) return outcome;
	if (held.seen !== seen) return "changed";
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

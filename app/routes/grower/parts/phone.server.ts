import { createHash } from "node:crypto";
import type { Language } from "#app/i18n/language.ts";
import { resources } from "#app/i18n/resources.ts";
import type { Pack } from "../phone/pack.ts";
import type { PageData } from "../phone/page-data.ts";
import { type OpenAnswering, todayIn } from "./answering.server.ts";

/** What a page tells the phone's script of the survey, and of what the server holds of it. */
export function phonePart(answering: OpenAnswering, language: Language): PhonePage {
	const { surveyId, operationId, holder, answers, timeZone, response } = answering;
	const told = response && {
		answers,
		changes: response.stepChanges,
		sent: response.receiptCode !== null,
		today: todayIn(timeZone),
		packVersion: packVersion(answering, language),
	};
	return { surveyId, operationId, holder, responseId: response?.responseId ?? null, told };
}
type PhonePage = Pick<PageData, "surveyId" | "operationId" | "holder" | "responseId" | "told">;

/** All that the survey's pages are drawn from, for a phone to take along. @returns undefined before the survey is begun. */
export function packOf(answering: OpenAnswering, language: Language): Pack | undefined {
	const { surveyId, operationId, holder, response, answers, timeZone } = answering;
	if (!response) return undefined;
	const { common, grower } = resources[language];
	return {
		...unchanging(answering),
		surveyId,
		operationId,
		responseId: response.responseId,
		holder,
		version: packVersion(answering, language),
		language,
		words: { common, grower },
		today: todayIn(timeZone),
		sent: response.receiptCode !== null,
		answers,
		changes: response.stepChanges,
	};
}

/** What seldom changes while a survey is open. Measures are for the network's figures, and of no use to a phone. */
function unchanging(answering: OpenAnswering) {
	const { definition, plantings, massUnit, crates, earlier, season, timeZone, closesAt } = answering;
	return {
		definition: { ...definition, measures: [] },
		plantings,
		massUnit,
		crates,
		earlier,
		season,
		timeZone,
		closesAt: closesAt.toISOString(),
	};
}

function packVersion(answering: OpenAnswering, language: Language): string {
	const { common, grower } = resources[language];
	return createHash("sha256")
		.update(JSON.stringify([unchanging(answering), language, common, grower]))
		.digest("base64url")
		.slice(0, 16);
}

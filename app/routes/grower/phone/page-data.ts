import type { StepChanges } from "#app/collect/step-change.ts";

/** What a page of the survey tells the phone's script; it stands in the page as data, for no script is written into pages. */
export type PageData = {
	stage: "ask" | "review" | "receipt" | "start";
	surveyId: string;
	operationId: string;
	responseId: string;
	/** Whose session it is, as a short hash: answers of one holder are not shown in another's. */
	holder: string;
	language: "en" | "es";
	/** Of each step, which change the server holds as the newest. */
	changes: StepChanges;
	/** The step that is asked. */
	stepKey?: string;
	words: KeptWords;
	/** What questions, or on the review page steps, are called. */
	labels: Record<string, string>;
};

export const keptWordKeys = [
	"keeping",
	"kept",
	"phone",
	"unread",
	"elsewhere",
	"twice",
	"seeBoth",
	"over",
	"closed",
	"noRoom",
	"lost",
	"unsent",
] as const;
export type KeptWords = Record<(typeof keptWordKeys)[number], string>;

/** Reads the page's data. @returns undefined on a page that has none. */
export function readPage(): PageData | undefined {
	const data = document.getElementById("answering")?.dataset.page;
	return data === undefined ? undefined : (JSON.parse(data) as PageData);
}

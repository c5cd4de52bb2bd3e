import type { Answer } from "#app/collect/form.ts";
import type { StepChanges } from "#app/collect/step-change.ts";

/** What a page of the survey tells the phone's script; it stands in the page as data, for no script is written into pages. */
export type PageData = {
	stage: "ask" | "review" | "receipt" | "start";
	surveyId: string;
	operationId: string;
	/** Null before the survey is begun. */
	responseId: string | null;
	/** Whose session it is, as a short hash: answers of one holder are not shown in another's. */
	holder: string;
	language: "en" | "es";
	/** What the server holds: null before the survey is begun. */
	told: {
		/** Of each step, which change is the newest. */
		changes: StepChanges;
		answers: Answer[];
		today: string;
		/** Whether answers were sent in before. */
		sent: boolean;
		packVersion: string;
	} | null;
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
	"afterClosing",
	"noRoom",
	"lost",
	"unsent",
] as const;
export type KeptWords = Record<(typeof keptWordKeys)[number], string>;

/** A page of a survey that was begun. */
export type BegunPage = PageData & { responseId: string; told: NonNullable<PageData["told"]> };

/** Reads the page's data. @returns undefined on a page that has none. */
export function readPage(): PageData | undefined {
	const data = document.getElementById("answering")?.dataset.page;
	return data === undefined ? undefined : (JSON.parse(data) as PageData);
}

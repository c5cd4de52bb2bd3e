import { createInstance, type TFunction } from "i18next";
import type { FormDefinition, Question } from "#app/collect/form.ts";
import { formNumberOf, type PaperQuery } from "#app/collect/paper-forms.schema.ts";
import type { PaperForm, PaperForms } from "#app/collect/paper-forms.server.ts";
import { listAllSteps, type Step } from "#app/collect/steps.ts";
import { unitFamilyOf, unitsFor } from "#app/collect/units.ts";
import { countyName } from "#app/i18n/county-name.ts";
import { type Language, wordsIn } from "#app/i18n/language.ts";
import { resources } from "#app/i18n/resources.ts";
import { i18nextSettings } from "#app/i18n/settings.ts";
import { formatterFor } from "#app/lib/format.ts";
import { helpContact } from "#app/lib/help-contact.ts";
import { onceEach } from "#app/lib/sentence-pattern.ts";

/** One form as it is printed, in one language: a page's own language has no part in it. */
export type PaperSheet = {
	key: string;
	language: Language;
	title: string;
	number: string;
	/** The grower's name and place, and how the form comes back. */
	lines: string[];
	returnBy: string;
	pledge: { title: string; lines: string[] };
	howTo: string;
	steps: { key: string; title: string; notes: string[]; questions: PaperQuestion[] }[];
	thanks: string;
};
export type PaperQuestion = {
	key: string;
	text: string;
	help: string | null;
	/** What is filled in: an amount with its units, a day, some of a list, words. */
	kind: "amount" | "day" | "options" | "words";
	/** Units to ring, or options to tick. */
	choices: string[];
	/** What is known already, to be confirmed or struck out. */
	known: string | null;
	silences: string[];
	rows: number;
};

/** Every form in the language or languages asked for. What forms have in common is put into words once, and sent once. */
export async function paperSheets(papers: PaperForms, query: PaperQuery): Promise<PaperSheet[]> {
	const words = createInstance();
	await words.init({ ...i18nextSettings, resources, lng: "en" });
	const inLanguage = onceEach((language: Language) =>
		sheetsIn(papers, language, words.getFixedT(language, "answered") as TFunction),
	);
	return papers.forms.flatMap((form) => languagesOf(query, form).map((language) => inLanguage(language)(form)));
}

function languagesOf({ language }: PaperQuery, form: PaperForm): Language[] {
	if (language === "both") return ["en", "es"];
	return [language === "own" ? form.language : language];
}

function sheetsIn(
	{ survey, definition }: PaperForms,
	language: Language,
	t: TFunction,
): (form: PaperForm) => PaperSheet {
	const format = formatterFor(language, t);
	const pledges = ["use", "who", "never", "law", "free"] as const;
	const onEverySheet = {
		language,
		title: t("answered:paper.title", { survey: wordsIn(survey.title, language), season: survey.season }),
		returnBy: t("answered:paper.returnBy", {
			day: format.dayOf(survey.closesAt, survey.timeZone),
			phone: helpContact.phone,
		}),
		pledge: { title: t("grower:pledge.title"), lines: pledges.map((part) => t(`grower:pledge.${part}`)) },
		howTo: t("answered:paper.howTo"),
		thanks: t("answered:paper.thanks"),
	};
	const stepOf = stepsIn(language, t);
	return (form) => ({
		...onEverySheet,
		key: `${form.operationId} ${language}`,
		number: t("answered:paper.number", { number: formNumberOf(form.operationId) }),
		lines: [form.name, form.contactName, countyName(t, { name: form.countyName, countyFips: form.countyFips })],
		steps: stepsOf(definition, form).map(stepOf),
	});
}

/** Photos come from the grower's phone alone. */
function stepsOf(definition: FormDefinition, form: PaperForm): Step[] {
	return listAllSteps(definition, form.plantings)
		.map((step) => ({
			...step,
			screen: { ...step.screen, questions: step.screen.questions.filter(({ type }) => type !== "photo") },
		}))
		.filter(({ screen }) => screen.questions.length > 0);
}

/** A step of each screen and crop in words: of a planting's own there are its name, and how many trees are known of. */
function stepsIn(language: Language, t: TFunction): (step: Step) => PaperSheet["steps"][number] {
	const inWords = onceEach((_of: string, step: Step) => ({
		notes: [
			...(step.screen.help ? [wordsIn(step.screen.help, language)] : []),
			...(step.screen.condition ? [t("answered:paper.ifApplies")] : []),
		],
		questions: step.screen.questions.map((question) => paperQuestion(question, step, language, t)),
	}));
	const titleOf = onceEach((_of: string, step: Step) => stepTitle(step, language, t));
	const { number } = formatterFor(language, t);
	return (step) => {
		const { screen, planting } = step;
		const of = `${screen.key} ${planting?.cropKey ?? ""}`;
		const { notes, questions } = inWords(of, step);
		return {
			key: step.key,
			title: titleOf(`${of} ${planting?.cultivar ?? ""}`, step),
			notes,
			questions: questions.map((told, i) => {
				const question = screen.questions[i]!;
				const isKnown = planting && question.type === "number" && question.prefill === "bearing_trees";
				return isKnown ? { ...told, known: t("answered:paper.known", { value: number(planting.bearingTrees) }) } : told;
			}),
		};
	};
}

function stepTitle({ screen, planting }: Step, language: Language, t: TFunction): string {
	const title = wordsIn(screen.title, language);
	if (!planting) return title;
	const { cultivar, cropKey } = planting;
	return t(cultivar ? "common:step.planting" : "common:step.crop", {
		title,
		crop: t(`common:crop.${cropKey}`),
		cultivar,
	});
}

function paperQuestion(question: Question, step: Step, language: Language, t: TFunction): PaperQuestion {
	const isNote = !question.required && (question.type === "short_text" || question.type === "long_text");
	const isShare = step.screen.sumToHundred?.includes(question.key) ?? false;
	return {
		key: question.key,
		text: wordsIn(question.text, language),
		help: question.help ? wordsIn(question.help, language) : null,
		...asked(question, step, language, t),
		known: null,
		silences: isNote || isShare ? [] : [t("grower:unknown.dont_know"), t("grower:unknown.refused")],
	};
}

function asked(
	question: Question,
	{ planting }: Step,
	language: Language,
	t: TFunction,
): Pick<PaperQuestion, "kind" | "choices" | "rows"> {
	switch (question.type) {
		case "date":
			return { kind: "day", choices: [], rows: 1 };
		case "choice":
		case "several":
		case "rating":
			return { kind: "options", choices: question.options.map(({ text }) => wordsIn(text, language)), rows: 1 };
		case "percent":
			return { kind: "amount", choices: ["%"], rows: 1 };
		case "number": {
			if (question.unitFamily === "trees")
				return { kind: "amount", choices: [t(`grower:screen.plants.${planting?.plantKind ?? "any"}`)], rows: 1 };
			const family = unitFamilyOf(question);
			const units = family === undefined ? [] : unitsFor(family, planting?.bushelLb ?? null);
			return { kind: "amount", choices: units.map((unit) => t(`grower:screen.unit.${unit}`)), rows: 1 };
		}
		default:
			return { kind: "words", choices: [], rows: question.type === "long_text" ? 4 : 1 };
	}
}

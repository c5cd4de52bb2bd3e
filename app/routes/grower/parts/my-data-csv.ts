import type { Answer } from "#app/collect/form.ts";
import type { MyData } from "#app/collect/my-data.server.ts";
import { toCsv } from "#app/publish/data-file.ts";

type Operation = MyData[number];
type Survey = Operation["surveys"][number];
type Value = string | number | boolean | Date | null;
/** One thing that is kept: about what, its name, what it is, how it was typed, since when. */
type Row = [part: string, about: string, name: string, value: Value, typed: string, at: Value];

const columns = ["operation", "part", "about", "name", "value", "typed", "at"] as const;

/** The same as the JSON file holds, one line for each thing that is kept, for a spreadsheet. */
export function myDataCsv(operations: MyData): string {
	const rows = operations.flatMap((operation) =>
		rowsOf(operation).map((row) => [operation.operation_id, ...row].map(asField)),
	);
	return toCsv(columns, rows);
}

/** Each named fact of one thing. */
function facts(part: string, about: string, of: Record<string, Value>): Row[] {
	return Object.entries(of).map(([name, value]) => [part, about, name, value, "", null]);
}

function rowsOf(operation: Operation): Row[] {
	const { pin, plantings, surveys, ...directory } = operation;
	return [
		...facts("operation", "", directory),
		...(pin ? facts("pin", "", pin) : []),
		...plantings.flatMap(({ planting_id, ...planting }) => facts("planting", planting_id, planting)),
		...surveys.flatMap((survey) => {
			const { answers_now, submissions, mails, photos, survey_id: surveyId, title, ...facing } = survey;
			return [
				...facts("survey", surveyId, { title_en: title.en, title_es: title.es, ...facing }),
				...answers_now.map((answer) => answerRow("answer_now", surveyId, answer, null)),
				...submissions.flatMap((sent) => sentRows(surveyId, sent)),
				...photos.map(({ photo_id, file, added_at }): Row => ["photo", surveyId, photo_id, file, "", added_at]),
				...mails.map((mail): Row => [
					"mail",
					surveyId,
					`${mail.kind} ${mail.wave}`,
					mailState(mail),
					"",
					mail.queuedAt,
				]),
			];
		}),
	];
}

function sentRows(surveyId: string, { version, submitted_at, withdrawn_at, answers }: Survey["submissions"][number]) {
	const part = `submission ${version}`;
	const withdrawn: Row[] = withdrawn_at ? [[part, surveyId, "withdrawn_at", withdrawn_at, "", withdrawn_at]] : [];
	return [...withdrawn, ...answers.map((answer) => answerRow(part, surveyId, answer, submitted_at))];
}

/** A question of one planting names it after the survey. A value that is no amount or word is what kind of answer it was. */
function answerRow(part: string, surveyId: string, answer: Answer, at: Date | null): Row {
	const { questionKey, plantingId, kind, value, given } = answer;
	const told = kind !== "given" ? kind : Array.isArray(value) ? value.join(" ") : value;
	const typed = given ? [given.text, given.unit ?? ""].join(" ").trim() : "";
	return [part, plantingId ? `${surveyId} ${plantingId}` : surveyId, questionKey, told, typed, at];
}

function mailState({ sentAt, failure }: Survey["mails"][number]): Value {
	return sentAt ?? failure ?? "waiting";
}

function asField(value: Value): string | number | null {
	if (value instanceof Date) return value.toISOString();
	return typeof value === "boolean" ? String(value) : value;
}

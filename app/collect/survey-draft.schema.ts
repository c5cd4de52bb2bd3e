import { z } from "zod";
import { typedClock, typedDay } from "#app/lib/typed-moment.ts";

const text = (most: number) => z.string({ error: "empty" }).trim().min(1, "empty").max(most, "too_long");
const several = (of: z.ZodType<string>) =>
	z.preprocess((sent) => (sent === undefined ? [] : sent), z.array(of).min(1, "empty"));

/** A closing day and clock time, as the two fields send them, on the clock of the survey's states. */
export const ClosingForm = z.object({
	closesOn: text(10).regex(typedDay, "date_wrong"),
	closesAt: text(5).regex(typedClock, "time_wrong"),
});
export type ClosingForm = z.infer<typeof ClosingForm>;

/** A survey as the desk's form sends it. Whether states are granted and crops known, the writing function checks. */
export const SurveyDraft = z.object({
	/** Of a ready form, or of one that an associate made; whether there is such a form, the writing function checks. */
	formKey: z.string({ error: "choice_wrong" }).max(80, "choice_wrong"),
	season: z.coerce
		.number({ error: "season_wrong" })
		.int("not_whole")
		.min(2000, "season_wrong")
		.max(2100, "season_wrong"),
	/** Both left empty, a survey is called as its form is; one alone, the writing function refuses. */
	titleEn: z.string().trim().max(120, "too_long").optional(),
	titleEs: z.string().trim().max(120, "too_long").optional(),
	crops: several(z.string().max(40, "choice_wrong")),
	states: several(z.string().max(2, "choice_wrong")),
	...ClosingForm.shape,
});
export type SurveyDraft = z.infer<typeof SurveyDraft>;

/** What of a draft can be changed: all but its form, on which its brief and its rehearsal rest. */
export const SurveyChange = SurveyDraft.omit({ formKey: true });
export type SurveyChange = z.infer<typeof SurveyChange>;

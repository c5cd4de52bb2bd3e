import { z } from "zod";
import { typedClock, typedDay } from "#app/lib/typed-moment.ts";

export const reminderWaves = [1, 2] as const;
export const reminderFields = {
	1: { on: "firstOn", at: "firstAt" },
	2: { on: "secondOn", at: "secondAt" },
} as const;

const text = (pattern: RegExp, code: string) => z.string().trim().max(10, "too_long").regex(pattern, code).optional();
const day = text(typedDay, "date_wrong");
const clock = text(typedClock, "time_wrong");

/** Days and clock times of the two reminders, in the survey's zone. Both empty: that reminder is not sent. */
export const ReminderForm = z.object({ firstOn: day, firstAt: clock, secondOn: day, secondAt: clock });
export type ReminderForm = z.infer<typeof ReminderForm>;

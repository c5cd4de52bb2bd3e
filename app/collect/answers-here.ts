import type { Outbox } from "./outbox.ts";
import { readWell } from "./read-well.ts";
import type { ReadSettings } from "./read-question.ts";
import { withStep } from "./replace-step.ts";
import { type Asking, findStep } from "./steps.ts";

/**
 * The answers as they will stand when the phone's have arrived: those that the server last told, with what was typed since
 * read and put in their place as the server will.
 */
export function withTyped(told: Asking, outbox: Outbox, settings: Omit<ReadSettings, "language">): Asking {
	const typed = Object.entries(outbox.steps).toSorted(([, one], [, other]) => one.order - other.order);
	let { answers } = told;
	for (const [stepKey, { values, language, state }] of typed) {
		const asking = { ...told, answers };
		const asked = findStep(asking, stepKey);
		const read = readWell(asking, stepKey, values, { ...settings, language });
		if (asked && read && state !== "refused") answers = withStep(asked, answers, read.answers, read.unread);
	}
	return { ...told, answers };
}

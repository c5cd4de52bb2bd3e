import type { Question, Screen } from "../form.ts";

/** What is promised to growers. */
export const mostMinutes = 5;

/** Seconds to read and answer one question; a number has to be looked up or remembered, a choice only recognised. */
const seconds: Record<Question["type"], number> = {
	number: 18,
	percent: 12,
	date: 15,
	choice: 10,
	rating: 8,
	several: 15,
	short_text: 15,
	long_text: 30,
	photo: 30,
};
const secondsAScreen = 5;
/** Beside the questions: the pledge before, the review after. */
const secondsAround = 30;
const plantings = 2;

/** What waits for an answer is asked of some growers only; of few, where the form skips it unless an answer asks for it. */
function shareAsked({ condition, whenUnsure }: Pick<Screen, "condition" | "whenUnsure">): number {
	if (!condition) return 1;
	return whenUnsure === "skip" ? 0.2 : 0.5;
}

/** Minutes that a grower with two plantings takes, rounded to the nearest whole one. A rule of thumb, not a measurement. */
export function estimateMinutes(screens: Screen[]): number {
	const all = screens.reduce((sum, screen) => sum + secondsOf(screen), secondsAround);
	return Math.max(1, Math.round(all / 60));
}

function secondsOf(screen: Screen): number {
	if (screen.questions.length === 0) return 0;
	const asked = screen.questions.reduce(
		(sum, question) => sum + seconds[question.type] * shareAsked(question),
		secondsAScreen,
	);
	return asked * shareAsked(screen) * (screen.perPlanting ? plantings : 1);
}

import type { TFunction } from "i18next";
import type { StateClock, Survey } from "#app/collect/surveys.server.ts";
import type { Formatter } from "#app/lib/format.ts";
import { groupBy } from "#app/lib/group-by.ts";

type WordsProps = { t: TFunction; format: Formatter };

const statesIn = (stateFips: string[], { t, format }: WordsProps) =>
	format.list(stateFips.map((key) => t(`common:state.${key}`)));

/** On whose clock a survey's times are set: told beside the boxes that take them. */
export function clockWords(survey: Pick<Survey, "timeZone" | "stateFips" | "clockStates">, words: WordsProps): string {
	const { timeZone, stateFips, clockStates } = survey;
	const clock = words.format.clock(timeZone);
	return clockStates.length === stateFips.length
		? words.t("desk:clock.one", { clock })
		: words.t("desk:clock.mostOf", { clock, states: statesIn(clockStates, words) });
}

/** When a survey closes; where its states have several clocks, by whose. */
export function closesWords(survey: Survey, words: WordsProps): string {
	const moment = words.format.moment(survey.closesAt, survey.timeZone);
	return survey.clockStates.length === survey.stateFips.length ? moment : `${moment}. ${clockWords(survey, words)}.`;
}

/** By whose clock times are set while the states are still to be chosen. */
export function clockOfChosenWords(clocks: StateClock[], words: WordsProps): string {
	const { t, format } = words;
	const groups = [...groupBy(clocks, ({ timeZone }) => format.clock(timeZone))];
	if (groups.length === 1) return t("desk:clock.one", { clock: groups[0]![0] });
	const each = groups.map(([clock, states]) =>
		t("desk:clock.has", {
			clock,
			states: statesIn(
				states.map(({ stateFips }) => stateFips),
				words,
			),
		}),
	);
	return [t("desk:clock.chosen"), ...each].join(" ");
}

import type { SizeClass } from "#app/collect/frame.ts";
import type { Answer } from "#app/collect/form.ts";
import { wallClockOf } from "#app/collect/survey-closing.ts";
import { inventAnswers } from "./answers.ts";
import { inventBloom } from "./bloom.ts";
import type { SeedOperation } from "./operations.ts";
import type { Place } from "./places.ts";
import { pickWeighted, type Random, seededRandom } from "./random.ts";
import { freezeAt, type Season } from "./seasons.ts";

/** An operation of a survey's frozen frame. */
export type Asked = SeedOperation & { stateFips: string; sizeClass: SizeClass; place: Place; isDemoGrower: boolean };

export type Reply = {
	operation_id: string;
	disposition: "complete" | "partial" | "refused" | "not_reached" | "undeliverable" | "not_eligible";
	disposition_at: string;
	response: SeedResponse | null;
};
export type SeedResponse = {
	response_id: string;
	language: "en" | "es";
	mode: "web" | "telephone" | "paper";
	started_at: string;
	draft_version: number;
	receipt_code: string | null;
	submissions: { version: number; submitted_at: string; answers: Answer[] }[];
	answers: Answer[];
};

const minute = 60_000;
const day = 1440 * minute;
/** How much likelier than others a grower answers, by state and by size. */
const byState: Record<string, number> = { "17": -0.06, "19": 0, "27": 0.05, "55": 0.03 };
const bySize: Record<SizeClass, number> = { small: -0.05, medium: 0.02, large: 0.09 };

/** How one operation's survey ends, or stands `now`. The same operation and season always give the same. */
export function inventReply(season: Season, asked: Asked, now: Date): Reply {
	const what = season.form === "bloom_watch" ? "bloom reply" : "reply";
	const random = seededRandom(`${what} ${season.season} ${asked.operation_id}`);
	// A grower who answers one year is likely to answer the next.
	const willing = seededRandom(`willing ${asked.operation_id}`).normal() * 0.15;
	const shaken = freezeAt(season, asked.place) > 0.3 ? 0.06 : 0;
	const likely = season.answering + byState[asked.stateFips]! + bySize[asked.sizeClass] + willing + shaken;
	const answers = random.chance(likely);
	// Whoever tries the demo as a grower finds earlier answers, and this season's survey still to be answered.
	if (asked.isDemoGrower ? season.closedAt : answers) return completeReply(random, season, asked, now);
	const disposition = asked.isDemoGrower
		? "not_reached"
		: pickWeighted(random, silences[season.closedAt ? "over" : "open"]);
	const settled = { not_reached: season.openedAt, undeliverable: new Date(season.openedAt.getTime() + 2 * minute) };
	const at = disposition in settled ? settled[disposition as keyof typeof settled] : momentOf(random, season, now);
	const response = disposition === "partial" ? partialResponse(random, season, asked, at) : null;
	return { operation_id: asked.operation_id, disposition, disposition_at: at.toISOString(), response };
}

const silences = {
	over: [
		["not_reached", 0.78],
		["undeliverable", 0.09],
		["refused", 0.05],
		["partial", 0.05],
		["not_eligible", 0.03],
	],
	open: [
		["not_reached", 0.91],
		["undeliverable", 0.03],
		["refused", 0.01],
		["partial", 0.05],
	],
} as const;

function completeReply(random: Random, season: Season, asked: Asked, now: Date): Reply {
	const first = momentOf(random, season, now);
	const answers = answersBy(random, season, asked, first);
	const { submissions, started } = submissionsOf(random, season, answers, first, now);
	return {
		operation_id: asked.operation_id,
		disposition: "complete",
		disposition_at: submissions.at(-1)!.submitted_at,
		response: {
			...responseOf(random, asked, started),
			draft_version: asked.plantings.length + 2 + submissions.length,
			receipt_code: receiptCode(random),
			submissions,
			answers,
		},
	};
}

/** Some come back a day later to add a word, which makes a second version of the same response. */
function submissionsOf(random: Random, season: Season, answers: Answer[], first: Date, now: Date) {
	const started = new Date(first.getTime() - (2 + 9 * random.next()) * minute);
	const whole = { version: 1, submitted_at: first.toISOString(), answers };
	const later = new Date(first.getTime() + (0.2 + random.next()) * day);
	const before = answers.filter(({ questionKey }) => questionKey !== "comment");
	if (before.length === answers.length || !random.chance(0.4) || later >= lastMoment(season, now)) {
		return { submissions: [whole], started };
	}
	const submissions = [
		{ ...whole, answers: before },
		{ version: 2, submitted_at: later.toISOString(), answers },
	];
	return { submissions, started };
}

/** Agreed to the pledge, told of one planting, and never sent it in. */
function partialResponse(random: Random, season: Season, asked: Asked, at: Date): SeedResponse {
	const first = asked.plantings[0]!.planting_id;
	const answers = answersBy(random, season, asked, at).filter(({ plantingId }) => plantingId === first);
	return { ...responseOf(random, asked, at), draft_version: 1, receipt_code: null, submissions: [], answers };
}

function answersBy(random: Random, season: Season, asked: Asked, at: Date): Answer[] {
	const invent = season.form === "bloom_watch" ? inventBloom : inventAnswers;
	return invent(random, season, asked, asked.place, wallClockOf(at, "America/Chicago").on);
}

function responseOf(random: Random, asked: Asked, started: Date) {
	const mode = pickWeighted(random, [
		["web", 0.92],
		["telephone", 0.05],
		["paper", 0.03],
	] as const);
	return { response_id: random.uuid(), language: asked.language, mode, started_at: started.toISOString() };
}

function lastMoment(season: Season, now: Date): Date {
	return new Date(Math.min(season.closesAt.getTime(), now.getTime()) - 10 * minute);
}

/** Most answer within days of a mail, by daylight; the last of them just before closing. */
function momentOf(random: Random, season: Season, now: Date): Date {
	const last = lastMoment(season, now);
	const mail = pickWeighted(
		random,
		[season.openedAt, ...season.reminders].map((sent, wave): [Date, number] => [sent, 0.5 ** wave]),
	);
	const waited = 12 * minute - Math.log(1 - random.next()) * 3.2 * day;
	const left = last.getTime() - mail.getTime() - 15 * minute;
	// Folded back into the time there is, instead of all who are late coming in the last minute.
	const moment = new Date(mail.getTime() + (waited < left ? waited : 12 * minute + random.next() * left));
	const hour = moment.getUTCHours();
	const night = hour >= 4 && hour < 12;
	return night && moment.getTime() + 8 * 60 * minute < last.getTime()
		? new Date(moment.getTime() + 8 * 60 * minute)
		: moment;
}

const signs = [..."34679ACDEFGHJKMNPRTWXY"];
function receiptCode(random: Random): string {
	const part = () => Array.from({ length: 4 }, () => random.pick(signs)).join("");
	return `${part()}-${part()}`;
}

import { momentIn, wallClockOf } from "#app/collect/survey-closing.ts";
import type { ReadyFormKey } from "#app/collect/forms/ready-forms.ts";
import { offsetFrom, type Place } from "./places.ts";

/** One spring night's damage: worst at its centre and less with distance, along an axis turned `tilt` degrees from east. */
type Freeze = {
	longitude: number;
	latitude: number;
	/** Share of a tender crop killed at the centre. */
	worst: number;
	lengthKm: number;
	widthKm: number;
	tilt: number;
};

/** One survey of a season. */
export type Season = {
	season: number;
	form: Extract<ReadyFormKey, "after_harvest" | "bloom_watch">;
	surveyId: string;
	openedAt: Date;
	closesAt: Date;
	/** Null while the survey is open. */
	closedAt: Date | null;
	reminders: Date[];
	freeze: Freeze;
	/** Share of a normal crop that is lost in any place of this year, freeze or not. */
	usualLoss: number;
	/** Share of plantings that bloomed less than in a normal year. */
	lightBloom: number;
	/** Days by which what is asked about, harvest or bloom, was later than usual. */
	late: number;
	/** When the figures were released and told of; null while the survey is open. */
	release: {
		draftedAt: Date;
		publishedAt: Date;
		/** Null where the map alone tells of it. */
		report: { startedAt: Date; submittedAt: Date; publishedAt: Date } | null;
	} | null;
	/** Of everybody asked, how many have answered by the end (or until now). */
	answering: number;
};

/** The one zone of the demo's four states. */
export const zone = "America/Chicago";
const at = (day: string, clock: string) => momentIn(day, clock, zone)!;
const days = 86_400_000;

const past: readonly Season[] = [
	{
		season: 2024,
		form: "after_harvest",
		surveyId: "5ea50000-2024-4000-8000-000000000001",
		openedAt: at("2024-10-21", "9:05"),
		closesAt: at("2024-12-13", "17:00"),
		closedAt: at("2024-12-13", "17:12"),
		reminders: [at("2024-11-04", "8:40"), at("2024-11-25", "9:20")],
		freeze: { longitude: -94.6, latitude: 46.4, worst: 0.12, lengthKm: 160, widthKm: 160, tilt: 0 },
		usualLoss: 0.11,
		lightBloom: 0,
		late: 0,
		release: {
			draftedAt: at("2025-01-08", "10:20"),
			publishedAt: at("2025-01-14", "9:45"),
			report: {
				startedAt: at("2025-01-14", "13:30"),
				submittedAt: at("2025-01-16", "11:15"),
				publishedAt: at("2025-01-17", "9:00"),
			},
		},
		answering: 0.61,
	},
	{
		season: 2025,
		form: "after_harvest",
		surveyId: "5ea50000-2025-4000-8000-000000000001",
		openedAt: at("2025-10-20", "9:10"),
		closesAt: at("2025-12-12", "17:00"),
		closedAt: at("2025-12-12", "17:08"),
		reminders: [at("2025-11-03", "8:35"), at("2025-11-24", "9:15")],
		// Late April: worst from Iowa to southern Wisconsin, milder in northern Illinois and southern Minnesota.
		freeze: { longitude: -91.9, latitude: 42.2, worst: 0.87, lengthKm: 330, widthKm: 165, tilt: 22 },
		usualLoss: 0.12,
		lightBloom: 0,
		late: 5,
		release: {
			draftedAt: at("2026-01-07", "10:20"),
			publishedAt: at("2026-01-13", "9:45"),
			report: {
				startedAt: at("2026-01-13", "13:30"),
				submittedAt: at("2026-01-15", "11:15"),
				publishedAt: at("2026-01-16", "9:00"),
			},
		},
		answering: 0.61,
	},
];

/** The bloom watch of the season whose spring froze: early enough that the cold of late April met apples in bloom. */
const bloom: Season = {
	...past[1]!,
	form: "bloom_watch",
	surveyId: "5ea50000-2025-4000-8000-000000000002",
	openedAt: at("2025-05-27", "9:05"),
	closesAt: at("2025-06-20", "17:00"),
	closedAt: at("2025-06-20", "17:06"),
	reminders: [at("2025-06-09", "8:40")],
	late: -9,
	lightBloom: 0.75,
	release: { draftedAt: at("2025-06-30", "10:10"), publishedAt: at("2025-07-02", "9:30"), report: null },
	answering: 0.67,
};

/** The demo's surveys in the order of their days: two harvests, the bloom between them, and one that is being asked. */
export function listSeasons(now: Date): Season[] {
	const closing = wallClockOf(new Date(now.getTime() + 28 * days), zone).on;
	return [
		past[0]!,
		bloom,
		past[1]!,
		{
			season: 2026,
			form: "after_harvest",
			surveyId: "5ea50000-2026-4000-8000-000000000001",
			openedAt: new Date(now.getTime() - 9 * days),
			closesAt: at(closing, "17:00"),
			closedAt: null,
			reminders: [],
			freeze: { longitude: -88.4, latitude: 44.9, worst: 0.3, lengthKm: 120, widthKm: 120, tilt: 0 },
			usualLoss: 0.14,
			lightBloom: 0,
			late: -3,
			release: null,
			answering: 0.4,
		},
	];
}

/** Share of a tender crop that the season's freeze killed in a place, 0 to 1. */
export function freezeAt({ freeze }: Season, place: Place): number {
	const { east, north } = offsetFrom(freeze, place);
	const turn = (freeze.tilt * Math.PI) / 180;
	const along = (east * Math.cos(turn) + north * Math.sin(turn)) / freeze.lengthKm;
	const across = (north * Math.cos(turn) - east * Math.sin(turn)) / freeze.widthKm;
	return freeze.worst * Math.exp(-(along ** 2) - across ** 2);
}

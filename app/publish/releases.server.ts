import type { Kysely } from "kysely";
import { groupBy } from "#app/lib/group-by.ts";
import { reader, type ReaderDB } from "./reader.server.ts";
import { type Release, type ReleaseArea, type ReleaseMeasure, toHue, toMethod, toRules, toWords } from "./release.ts";

type Reader = Kysely<ReaderDB>;

/** Releases that stand, the latest first: neither replaced by a revision nor withdrawn. */
export async function listReleases(db: Reader = reader()): Promise<Release[]> {
	const rows = await selectStanding(db).orderBy("r.number", "desc").execute();
	return rows.map(toRelease);
}

/** All releases with what became of each, the latest first. */
export async function listEveryRelease(db: Reader = reader()): Promise<Release[]> {
	const rows = await selectReleases(db).orderBy("r.number", "desc").execute();
	return rows.map(toRelease);
}

/** Every edition of one survey's figures, the latest first. */
export async function listEditions(seriesId: string, db: Reader = reader()): Promise<Release[]> {
	const rows = await selectReleases(db).where("r.series_id", "=", seriesId).orderBy("r.edition", "desc").execute();
	return rows.map(toRelease);
}

/** Whatever became of it: who has its address is told. */
export async function findRelease(number: number, db: Reader = reader()): Promise<Release | undefined> {
	const row = await selectReleases(db).where("r.number", "=", number).executeTakeFirst();
	return row && toRelease(row);
}

export async function findReleaseById(releaseId: string, db: Reader = reader()): Promise<Release | undefined> {
	const row = await selectReleases(db).where("r.release_id", "=", releaseId).executeTakeFirst();
	return row && toRelease(row);
}

/** The standing release with the highest number: what the home page speaks of. */
export async function findLatestRelease(db: Reader = reader()): Promise<Release | undefined> {
	const row = await selectStanding(db).orderBy("r.number", "desc").limit(1).executeTakeFirst();
	return row && toRelease(row);
}

/** The measures of a release, in its own order. */
export async function listMeasures(releaseId: string, db: Reader = reader()): Promise<ReleaseMeasure[]> {
	const rows = await db
		.selectFrom("release.measure as measure")
		.innerJoin("release.release as release", "release.release_id", "measure.release_id")
		.select(["measure_key", "label", "description", "kind", "unit", "decimals", "worse", "hue", "release.season"])
		.where("measure.release_id", "=", releaseId)
		.orderBy("position")
		.orderBy("measure_key")
		.execute();
	return rows.map((row) => ({
		key: row.measure_key,
		label: toWords(row.label),
		description: toWords(row.description),
		kind: row.kind as ReleaseMeasure["kind"],
		unit: row.unit as ReleaseMeasure["unit"],
		decimals: row.decimals,
		season: row.season,
		worse: row.worse as ReleaseMeasure["worse"],
		hue: toHue(row.hue),
	}));
}

/** The crops of a release, "all" first; for one measure only those for which it has a figure somewhere. */
export async function listCrops(releaseId: string, measureKey?: string, db: Reader = reader()): Promise<string[]> {
	const rows = measureKey
		? await db
				.selectFrom("release.figure")
				.select("crop_key")
				.distinct()
				.where("release_id", "=", releaseId)
				.where("measure_key", "=", measureKey)
				.execute()
		: await db.selectFrom("release.cell").select("crop_key").distinct().where("release_id", "=", releaseId).execute();
	return rows.map((row) => row.crop_key).toSorted((a, b) => cropOrder(a).localeCompare(cropOrder(b)));
}

const cropOrder = (key: string) => (key === "all" ? "" : key);

/** The areas of a release by name; of one kind when asked. */
export async function listAreas(
	releaseId: string,
	kind?: ReleaseArea["kind"],
	db: Reader = reader(),
): Promise<ReleaseArea[]> {
	let query = db
		.selectFrom("release.area")
		.select(["area_key", "kind", "name", "parent_key", "state_fips"])
		.where("release_id", "=", releaseId);
	if (kind) query = query.where("kind", "=", kind);
	const rows = await query.orderBy("name").orderBy("area_key").execute();
	return rows.map((row) => ({
		key: row.area_key,
		kind: row.kind as ReleaseArea["kind"],
		name: row.name,
		parentKey: row.parent_key,
		stateFips: row.state_fips,
	}));
}

/** How many growers answered each release in all, as the band that it publishes; none where that is withheld. */
export async function listRespondentsBands(db: Reader = reader()): Promise<Record<string, string>> {
	const rows = await db
		.selectFrom("release.cell as c")
		.innerJoin("release.area as a", (join) =>
			join.onRef("a.release_id", "=", "c.release_id").onRef("a.area_key", "=", "c.area_key"),
		)
		.select(["c.release_id", "c.respondents_band"])
		.where("a.kind", "=", "region")
		.where("c.crop_key", "=", "all")
		.where("c.status", "=", "shown")
		.execute();
	return Object.fromEntries(rows.map((row) => [row.release_id, row.respondents_band!]));
}

/** The states of every release, as FIPS codes in order, by the release's id. */
export async function listStatesByRelease(db: Reader = reader()): Promise<Record<string, string[]>> {
	const rows = await db
		.selectFrom("release.area")
		.select(["release_id", "state_fips"])
		.distinct()
		.where("kind", "=", "county")
		.where("state_fips", "is not", null)
		.orderBy("state_fips")
		.execute();
	return Object.fromEntries(
		[...groupBy(rows, (row) => row.release_id)].map(([id, of]) => [id, of.map((row) => row.state_fips!)]),
	);
}

/** The states whose counties a release covers, as FIPS codes. */
export async function listCoveredStates(releaseId: string, db: Reader = reader()): Promise<string[]> {
	const rows = await db
		.selectFrom("release.area")
		.select("state_fips")
		.distinct()
		.where("release_id", "=", releaseId)
		.where("kind", "=", "county")
		.where("state_fips", "is not", null)
		.orderBy("state_fips")
		.execute();
	return rows.flatMap((row) => row.state_fips ?? []);
}

function selectReleases(db: Reader) {
	return db
		.selectFrom("release.release as r")
		.leftJoin("release.release as next", "next.revises", "r.release_id")
		.leftJoin("release.withdrawal as w", "w.release_id", "r.release_id")
		.select(["r.release_id", "r.number", "r.season", "r.form_key", "r.title", "r.published_at"])
		.select(["r.rules", "r.method", "r.code_version", "r.checksum", "r.series_id", "r.edition", "r.revision_reason"])
		.select(["next.number as replaced_by", "w.withdrawn_at", "w.reason as withdrawal_reason"]);
}

const selectStanding = (db: Reader) =>
	selectReleases(db).where("next.release_id", "is", null).where("w.release_id", "is", null);

type ReleaseRow = Awaited<ReturnType<ReturnType<typeof selectReleases>["executeTakeFirstOrThrow"]>>;

function toRelease(row: ReleaseRow): Release {
	return {
		releaseId: row.release_id,
		number: row.number,
		season: row.season,
		formKey: row.form_key,
		title: toWords(row.title),
		publishedAt: row.published_at.toISOString(),
		rules: toRules(row.rules),
		method: toMethod(row.method),
		codeVersion: row.code_version,
		checksum: row.checksum,
		edition: row.edition,
		seriesId: row.series_id,
		revisionReason: row.revision_reason === null ? null : toWords(row.revision_reason),
		replacedBy: row.replaced_by,
		withdrawn: row.withdrawn_at && {
			at: row.withdrawn_at.toISOString(),
			reason: toWords(row.withdrawal_reason),
		},
	};
}

export { countCells, findCells, listCells, listCropCells } from "./cells.server.ts";

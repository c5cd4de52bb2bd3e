import { expect, test } from "vitest";
import { findPublishedReport, listPublishedReports } from "#app/publish/reports.server.ts";
import { resolveReport } from "#app/publish/resolved-report.server.ts";
import { findReleaseById, listReleases } from "#app/publish/releases.server.ts";
import { runScript } from "#tests/helpers/database.ts";
import { bloomOf, surveyOf, useDemo } from "./seed-fixture.ts";

const { rowsOf, numberOf, databaseName } = useDemo();

test("the demo has its growers, plantings and three seasons, and owners who hold several operations", async () => {
	expect(await numberOf("select count(*) from directory.operation")).toBe(1_200);
	const plantings = await numberOf("select count(*) from directory.planting");
	expect(plantings).toBeGreaterThan(2_400);
	expect(plantings).toBeLessThan(2_600);
	const surveys = await rowsOf<{ survey_id: string }>(
		"select survey_id from collect.survey order by season, opened_at",
	);
	const wanted = [surveyOf(2024), bloomOf(2025), surveyOf(2025), surveyOf(2026)];
	expect(surveys.map(({ survey_id }) => survey_id)).toEqual(wanted);
	const several = `select count(*) from (select from directory.operation group by owner_id having count(*) between 2 and 4) o`;
	expect(await numberOf(several)).toBeGreaterThanOrEqual(24);
	expect(await numberOf(several.replace("between 2 and 4", "> 4"))).toBe(0);
});

test("no address of the demo can reach anybody", async () => {
	const addresses = await rowsOf<{ email: string }>(
		"select email from directory.operation union all select email from auth.person",
	);
	expect(addresses).toHaveLength(1_209);
	expect(addresses.filter(({ email }) => !/^[\w.]+@[\w.]+\.example$/.test(email))).toEqual([]);
});

test("the freeze of 2025 cost Iowa's apples most, in the facts and in the published figures alike", async () => {
	const told = (season: number, state: string) =>
		numberOf(
			`select 100 * sum(y) / sum(x) from collect.fact
			where survey_id = $1 and measure_key = 'crop_loss' and crop_key = 'apple' and state_fips = $2`,
			[surveyOf(season), state],
		);
	const published = (season: number, state: string) =>
		numberOf(
			`select value from release.figure join release.release using (release_id)
			where season = $1 and measure_key = 'crop_loss' and crop_key = 'apple' and area_key = $2`,
			[season, state],
		);
	for (const lossOf of [told, published]) {
		expect((await lossOf(2025, "19")) - (await lossOf(2024, "19"))).toBeGreaterThan(40);
		expect((await lossOf(2025, "19")) - (await lossOf(2025, "27"))).toBeGreaterThan(30);
		expect(await lossOf(2024, "19")).toBeLessThan(20);
	}
	const everything = `select count(*) from collect.fact where survey_id = $1 and measure_key = 'total_loss' and y = 1`;
	expect(await numberOf(everything, [surveyOf(2025)])).toBeGreaterThan(10);
});

test("2024 and 2025 are released by two people after a passed audit, and 2026 is open without a release", async () => {
	const releases = await listReleases();
	expect(releases.toReversed().map(({ season, formKey }) => [season, formKey])).toEqual([
		[2024, "after_harvest"],
		[2025, "bloom_watch"],
		[2025, "after_harvest"],
	]);
	const drafts = await rowsOf<{ season: number; status: string; passed: boolean; alone: boolean; late: boolean }>(
		`select season, status, (d.audit ->> 'passed')::boolean as passed, drafted_by = decided_by as alone,
			s.closed_at < d.drafted_at and d.drafted_at < p.published_at
				and to_char(p.published_at, 'YYYY-MM') = case p.form_key when 'bloom_watch' then season || '-07' else season + 1 || '-01' end as late
		from collect.release_draft d join collect.survey s using (survey_id) join release.release p using (release_id, season)
		order by season`,
	);
	const fine = { status: "approved", passed: true, alone: false, late: true };
	expect(drafts).toEqual([2024, 2025, 2025].map((season) => ({ season, ...fine })));
	expect(await numberOf("select count(*) from collect.release_draft")).toBe(3);
	expect(
		await numberOf(
			`select count(*) from collect.survey where survey_id = $1 and opened_at < now() and closed_at is null
				and closes_at between now() + interval '26 days' and now() + interval '30 days'`,
			[surveyOf(2026)],
		),
	).toBe(1);
});

test("a good part of the counties with apple growers is shown, so that the map is worth a look", async () => {
	const counties = await rowsOf<{ season: number; shown: number; share: number }>(
		`select season, count(*) filter (where status = 'shown')::int as shown,
			(count(*) filter (where status = 'shown'))::float8 / count(*) as share
		from release.cell join release.area a using (release_id, area_key) join release.release using (release_id)
		where a.kind = 'county' and crop_key = 'apple' and status <> 'no_growers' group by season, form_key`,
	);
	expect(counties).toHaveLength(3);
	for (const { shown, share } of counties) {
		expect(shown).toBeGreaterThanOrEqual(30);
		expect(share).toBeGreaterThan(1 / 3);
	}
});

test("each harvest's release has a report that any reader can open, with every figure found", async () => {
	const reports = await listPublishedReports();
	expect(reports.map(({ slug }) => slug)).toEqual(["crop-report-2025", "crop-report-2024"]);
	for (const { slug, releaseId, publishedAt } of reports) {
		const report = await findPublishedReport(slug);
		const release = await findReleaseById(releaseId);
		const resolved = await resolveReport(report!.content, release!);
		expect(new Date(publishedAt).getUTCFullYear()).toBe(release!.season + 1);
		expect(resolved.blocks.filter(({ type }) => type === "missing")).toEqual([]);
		expect(JSON.stringify(resolved)).not.toContain(`"figure":null`);
		const figure = resolved.summary.en.find(({ kind }) => kind === "figure");
		expect(figure).toMatchObject({ figure: { cell: { status: "shown", value: expect.any(Number) } } });
	}
});

test("apples bloomed earlier to the south, in enough counties for a map", async () => {
	const bloomed = await rowsOf<{ area_key: string; value: number }>(
		`select area_key, value from release.figure join release.release using (release_id)
		where measure_key = 'first_bloom' and crop_key = 'apple' and steadiness <> 'rough'`,
	);
	const dayOf = (area: string) => bloomed.find(({ area_key }) => area_key === area)!.value;
	expect(dayOf("19")).toBeLessThan(dayOf("55") - 3);
	expect(dayOf("17")).toBeLessThan(dayOf("27") - 6);
	expect(bloomed.filter(({ area_key }) => /^\d{5}$/.test(area_key)).length).toBeGreaterThanOrEqual(30);
});

test("a second run changes nothing, and one that was cut short before the last season goes on", async () => {
	const tables = (
		await rowsOf<{ name: string }>(
			`select format('%I.%I', schemaname, tablename) as name from pg_tables
			where schemaname in ('directory', 'auth', 'collect', 'release', 'publish', 'readership', 'log') order by 1`,
		)
	).map((table) => table.name);
	const sums = tables.map(
		(table) =>
			`select '${table}' as name, coalesce(sum(('x' || md5(t::text))::bit(48)::bigint), 0) as sum from ${table} t`,
	);
	const state = () => rowsOf(`${sums.join(" union all ")} order by 1`);
	const replies = () =>
		rowsOf(`select operation_id, disposition, response_id, receipt_code from collect.frame_operation
			left join collect.response using (survey_id, operation_id) where survey_id = '${surveyOf(2026)}' order by 1`);
	const before = { state: await state(), replies: await replies() };
	await runScript("db/seed/seed.ts", databaseName());
	expect(await state()).toEqual(before.state);

	await removeSurvey(surveyOf(2026));
	expect(await replies()).toEqual([]);
	await runScript("db/seed/seed.ts", databaseName());
	expect(await replies()).toEqual(before.replies);
}, 120_000);

/** As if the seed had never come to this survey. */
async function removeSurvey(surveyId: string): Promise<void> {
	const ofResponse = "response_id in (select response_id from collect.response where survey_id = $1)";
	for (const [table, where] of [
		["personal_link", "survey_id = $1"],
		["mailing", "survey_id = $1"],
		["fact", "survey_id = $1"],
		["submission", ofResponse],
		["answer", ofResponse],
		["response", "survey_id = $1"],
		["frame_crop", "survey_id = $1"],
		["frame_operation", "survey_id = $1"],
		["survey", "survey_id = $1"],
	]) {
		await rowsOf(`delete from collect.${table} where ${where}`, [surveyId]);
	}
}

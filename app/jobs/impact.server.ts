import { sql } from "kysely";
import { type Trx, underScope } from "#app/auth/scope.server.ts";
import type { Coordinator } from "#app/auth/viewer.ts";
import type { Disposition } from "#app/collect/frame-list.server.ts";
import { frameResponse } from "#app/estimate/response-rate.ts";
import { impactKeys, type ImpactKey, type Impact, type SeasonImpact } from "./impact.ts";

/**
 * What the network reached, season by season, the latest first. Sums over all states and nothing smaller: no grower, answer
 * or reader can be told from them.
 */
export async function readImpact(trx: Trx, _viewer: Coordinator): Promise<Impact> {
	const asked = await underScope(trx, { kind: "network" }, () => readAsked(trx));
	const told = await readTold(trx);
	const seasons = [...new Set([...asked, ...told].map(({ season }) => season))].toSorted((a, b) => b - a);
	const empty = Object.fromEntries(impactKeys.map((key) => [key, null])) as Record<ImpactKey, number | null>;
	return {
		seasons: seasons.map((season): SeasonImpact => {
			const ofSeason = asked.find((row) => row.season === season);
			const rate = ofSeason && frameResponse(ofSeason.dispositions).counted.rr1;
			return {
				...empty,
				...told.find((row) => row.season === season),
				...(ofSeason && { reached: ofSeason.reached, answers: ofSeason.answers, surveys: ofSeason.surveys }),
				responseRate: rate == null ? null : rate * 100,
				season,
			};
		}),
		now: await readNow(trx),
	};
}

type Asked = {
	season: number;
	surveys: number;
	reached: number;
	answers: number;
	dispositions: { disposition: Disposition; operations: number; bearingTrees: number }[];
};

/** Of surveys that were opened: an operation in two of a season's surveys was reached once and asked twice. */
async function readAsked(trx: Trx): Promise<Asked[]> {
	const { rows } = await sql<Asked>`
		with asked as (
			select s.season, s.survey_id, f.operation_id, f.disposition
			from collect.survey s join collect.frame_operation f using (survey_id) where s.opened_at is not null),
		by_disposition as (
			select season, disposition, count(*)::int as operations from asked group by season, disposition)
		select a.season, count(distinct a.survey_id)::int as surveys,
			(count(distinct a.operation_id) filter (where a.disposition <> 'not_eligible'))::int as reached,
			(count(*) filter (where a.disposition = 'complete'))::int as answers,
			(select jsonb_agg(jsonb_build_object('disposition', d.disposition, 'operations', d.operations, 'bearingTrees', 0))
				from by_disposition d where d.season = a.season) as dispositions
		from asked a group by a.season`.execute(trx);
	return rows;
}

type Told = Pick<
	SeasonImpact,
	"season" | "counties" | "releases" | "reports" | "reads" | "pdfs" | "mails" | "downloads"
>;

/** What was published of a season and what became of it. Withdrawn figures show no county any more. */
async function readTold(trx: Trx): Promise<Told[]> {
	const { rows } = await sql<Told>`
		with standing as (
			select r.release_id, r.season from release.release r
			where not exists (select from release.withdrawal w where w.release_id = r.release_id)
				and not exists (select from release.release n where n.revises = r.release_id)),
		report as (
			select p.report_id, p.slug, r.season from publish.report p join release.release r using (release_id)
			where p.state = 'published')
		select season, count(*)::int as releases,
			coalesce((select count(distinct c.area_key) from standing s join release.cell c using (release_id)
				join release.area a using (release_id, area_key)
				where s.season = r.season and a.kind = 'county' and c.status = 'shown'), 0)::int as counties,
			(select count(distinct slug) from report p where p.season = r.season)::int as reports,
			(select coalesce(sum(t.times), 0) from report p join readership.report_read t using (report_id)
				where p.season = r.season and t.kind = 'page')::int as reads,
			(select coalesce(sum(t.times), 0) from report p join readership.report_read t using (report_id)
				where p.season = r.season and t.kind = 'pdf')::int as pdfs,
			(select count(*) from report p join readership.mailing m using (report_id)
				where p.season = r.season and m.sent_at is not null)::int as mails,
			((select count(*) from log.download d join release.release o using (release_id) where o.season = r.season)
				+ (select coalesce(sum(t.times), 0) from readership.file_taken t join release.release o using (release_id)
					where o.season = r.season))::int as downloads
		from release.release r group by season`.execute(trx);
	return rows;
}

async function readNow(trx: Trx): Promise<Impact["now"]> {
	const { rows } = await sql<Impact["now"]>`select
		(select count(*) from readership.subscriber)::int as subscribers,
		(select count(distinct person_id) from auth.role_grant where role = 'researcher' and auth.grant_holds(revoked_at, ends_on))::int
			as members,
		(select min(read_on)::text from readership.report_read) as "readsSince",
		(select min(taken_on)::text from readership.file_taken) as "filesSince"`.execute(trx);
	return rows[0]!;
}

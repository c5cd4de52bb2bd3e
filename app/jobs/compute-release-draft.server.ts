import { sql } from "kysely";
import { scopedTransaction, type Trx } from "#app/auth/scope.server.ts";
import { FormDefinition } from "#app/collect/form.ts";
import { Words } from "#app/lib/words.ts";
import { listAreas } from "#app/directory/areas.server.ts";
import { estimateSurvey } from "#app/estimate/survey.ts";
import { log } from "#app/lib/log.server.ts";
import { listOwnerShares } from "#app/protect/owner-shares.server.ts";
import type { OwnerShares } from "#app/protect/owner-shares.ts";
import { ALL_CROPS } from "#app/protect/codes.ts";
import type { Holding } from "#app/protect/holdings.ts";
import { listHoldings } from "#app/protect/holdings.server.ts";
import { cellKey, type Protection, type ProtectionTable } from "#app/protect/protect.ts";
import { protectInThread } from "#app/protect/protect-thread.server.ts";
import { surveyTable } from "#app/protect/survey-table.ts";
import { type DraftCell, ReleaseAudit, type ReleaseMethod, ReleaseRules } from "#app/release/draft.ts";
import { draftChecksum } from "#app/release/publish.server.ts";
import { listFrameStrata, listTallies } from "#app/tally/tally.server.ts";
import type { FrameStratum, KeptTally } from "#app/tally/tally.ts";
import { assembleCells } from "./assemble-cells.ts";
import { DraftNotWanted, gapOf, watchDraft } from "./draft-watch.server.ts";
import { type SensitiveMeasures, sensitiveMeasures } from "./sensitive-measures.ts";

type Inputs = {
	rules: ReleaseRules;
	method: Omit<ReleaseMethod, "joins">;
	tallies: KeptTally[];
	frame: (FrameStratum & { cropKey: string })[];
	frameCells: ReadonlySet<string>;
	baseKeys: string[];
	sensitive: SensitiveMeasures;
	shares: OwnerShares[];
	holdings: Holding[];
};

/**
 * Makes a draft's cells: tally, estimate, protect, audit. Reading and writing are two short transactions, with the long
 * computation between them; a draft that was superseded meanwhile is left as it is.
 * @param transact runs both; the demo's data passes one that stays in a transaction of its own.
 */
export async function computeReleaseDraft(
	{ releaseDraftId }: { releaseDraftId: string },
	transact: typeof scopedTransaction = scopedTransaction,
): Promise<void> {
	const inputs = await transact({ kind: "network" }, (trx) => readInputs(trx, releaseDraftId), "repeatable read");
	if (!inputs) return;
	const { rules, method, tallies, frame, shares } = inputs;
	const { steadyCv: steady, careCv: care, steadyDays, careDays } = rules;
	const cutOffs = { steady, care, steadyDays, careDays };
	const areas = method.areas.flatMap(({ areaKey, parentKey }) => (parentKey === null ? [] : [{ areaKey, parentKey }]));
	const started = performance.now();
	const table = surveyTable({
		areas,
		cropKeys: method.cropKeys,
		shares,
		baseKeys: inputs.baseKeys,
		sensitiveKeys: inputs.sensitive.counted,
		holdings: inputs.holdings,
	});
	const protection = await protectWatched(releaseDraftId, table, rules, transact);
	if (!protection) return;
	const seconds = (performance.now() - started) / 1000;
	const { estimates, joins } = estimateSurvey({
		measures: method.measures,
		frame,
		tallies,
		areasOfCounty: areasOfCounty(method.areas),
		cutOffs,
	});
	const cells = assembleCells({ method, frameCells: inputs.frameCells, shares, protection, estimates });
	const audit = ReleaseAudit.parse({
		...protection.audit,
		seconds,
		gap: protection.loss && gapOf(protection.loss),
	});
	await transact({ kind: "network" }, (trx) => writeDraft(trx, releaseDraftId, { ...method, joins }, audit, cells));
	log.info({ releaseDraftId, cells: cells.length, passed: audit.passed, seconds }, "release drafted");
}

/** undefined when nobody waits for the draft any more. */
async function protectWatched(
	releaseDraftId: string,
	table: ProtectionTable,
	rules: ReleaseRules,
	transact: typeof scopedTransaction,
): Promise<Protection | undefined> {
	await using watch = watchDraft(releaseDraftId, transact);
	try {
		return await protectInThread(table, rules, {}, watch);
	} catch (error) {
		if (!(error instanceof DraftNotWanted)) throw error;
		log.info({ releaseDraftId }, "release draft not wanted any more");
		return undefined;
	}
}

async function readInputs(trx: Trx, releaseDraftId: string): Promise<Inputs | undefined> {
	const row = await trx
		.selectFrom("collect.release_draft as d")
		.innerJoin("collect.survey as s", "s.survey_id", "d.survey_id")
		.innerJoin("collect.form_version as v", "v.form_version_id", "s.form_version_id")
		.select([
			"d.rules",
			"s.survey_id",
			"s.season",
			"s.title",
			"s.crop_keys",
			"s.opened_at",
			"s.closed_at",
			"s.closes_at",
			"v.definition",
		])
		.where("d.release_draft_id", "=", releaseDraftId)
		.where("d.status", "in", ["queued", "failed"])
		.executeTakeFirst();
	if (!row) return undefined;
	const definition = FormDefinition.parse(row.definition);
	const surveyId = row.survey_id;
	const baseKeys = definition.measures.flatMap(({ base, key }) => (base ? key.replace(/^base\./, "") : []));
	const rules = ReleaseRules.parse(row.rules);
	const sensitive = sensitiveMeasures(definition);
	const states = await countResponses(trx, surveyId);
	const tallies = await listTallies(trx, surveyId);
	const surveyStates = new Set(states.map((state) => state.stateFips));
	const areas = (await listAreas(trx))
		.filter((area) => area.stateFips === null || surveyStates.has(area.stateFips))
		.map(({ key, kind, parentKey, stateFips, name }) => ({ areaKey: key, kind, parentKey, stateFips, name }));
	const total = (key: "asked" | "answered") => states.reduce((sum, state) => sum + state[key], 0);
	return {
		rules,
		method: {
			formKey: definition.key,
			season: row.season,
			title: Words.parse(row.title),
			openedAt: (row.opened_at ?? row.closes_at).toISOString(),
			closedAt: (row.closed_at ?? row.closes_at).toISOString(),
			all: { asked: total("asked"), answered: total("answered") },
			states,
			setAside: tallies.reduce((sum, tally) => sum + tally.setAside, 0),
			measures: definition.measures.filter((measure) => !measure.base),
			areas,
			cropKeys: row.crop_keys,
		},
		tallies,
		frame: await listFrameStrata(trx, surveyId),
		frameCells: await listFrameCells(trx, surveyId),
		baseKeys,
		sensitive,
		shares: await listOwnerShares(trx, {
			surveyId,
			baseKeys,
			sensitiveKeys: sensitive.all,
			countedKeys: sensitive.counted,
			largestOwners: rules.largest?.owners,
		}),
		holdings: await listHoldings(trx, surveyId, { baseKeys, countedKeys: sensitive.counted }),
	};
}

/** Who was asked and who answered. Answers begun and never sent in are in no figure, so they count as none. */
async function countResponses(trx: Trx, surveyId: string): Promise<ReleaseMethod["states"]> {
	const { rows } = await sql<{ stateFips: string; asked: number; answered: number }>`
		select state_fips as "stateFips", count(*)::int as asked,
			(count(*) filter (where disposition = 'complete'))::int as answered
		from collect.frame_operation where survey_id = ${surveyId} group by state_fips order by state_fips`.execute(trx);
	return rows;
}

/** Which cells of the frame have growers at all, as `area|crop`: where none is asked, none answers. */
async function listFrameCells(trx: Trx, surveyId: string): Promise<Set<string>> {
	const { rows } = await sql<{ county_fips: string; crop_key: string }>`
		select distinct o.county_fips, c.crop_key
		from collect.frame_crop c join collect.frame_operation o using (survey_id, operation_id)
		where c.survey_id = ${surveyId}`.execute(trx);
	return new Set(rows.flatMap((row) => [cellKey(row.county_fips, row.crop_key), cellKey(row.county_fips, ALL_CROPS)]));
}

function areasOfCounty(areas: ReleaseMethod["areas"]): Map<string, string[]> {
	const parentOf = new Map(areas.map((area) => [area.areaKey, area.parentKey]));
	const pathOf = (areaKey: string): string[] => {
		const parent = parentOf.get(areaKey);
		return parent ? [areaKey, ...pathOf(parent)] : [areaKey];
	};
	return new Map(areas.filter((area) => area.kind === "county").map((area) => [area.areaKey, pathOf(area.areaKey)]));
}

async function writeDraft(
	trx: Trx,
	releaseDraftId: string,
	method: ReleaseMethod,
	audit: ReleaseAudit,
	cells: DraftCell[],
): Promise<void> {
	const draft = await trx
		.updateTable("collect.release_draft")
		.set({
			status: audit.passed ? "audited" : "audit_failed",
			method: JSON.stringify(method),
			audit: JSON.stringify(audit),
			checksum: draftChecksum(cells),
			computed_at: new Date(),
		})
		.where("release_draft_id", "=", releaseDraftId)
		.where("status", "in", ["queued", "failed"])
		.returning("release_draft_id")
		.executeTakeFirst();
	if (!draft) return;
	const rows = cells.map((cell) => ({
		crop_key: cell.cropKey,
		area_key: cell.areaKey,
		status: cell.status,
		reasons: cell.reasons,
		respondents: cell.respondents,
		figures: cell.figures,
	}));
	await sql`insert into collect.release_draft_cell (release_draft_id, crop_key, area_key, status, reasons, respondents, figures)
		select ${releaseDraftId}::uuid, crop_key, area_key, status, array(select jsonb_array_elements_text(reasons)), respondents,
			nullif(figures, 'null'::jsonb)
		from jsonb_to_recordset(${JSON.stringify(rows)}::jsonb)
		as c(crop_key text, area_key text, status text, reasons jsonb, respondents int, figures jsonb)`.execute(trx);
}

import { describe, expect, test } from "vitest";
import { listCallCells, listCalls } from "#app/collect/calls.server.ts";
import { CallQuery } from "#app/collect/contacts.schema.ts";
import { FrameQuery } from "#app/collect/desk-lists.schema.ts";
import { listFrame } from "#app/collect/frame-list.server.ts";
import { PaperQuery } from "#app/collect/paper-forms.schema.ts";
import { listPaperForms } from "#app/collect/paper-forms.server.ts";
import { openSurvey } from "#app/collect/survey-opening.server.ts";
import { createSurvey } from "#app/collect/surveys.server.ts";
import type { Trx } from "#app/auth/scope.server.ts";
import { OperationQuery } from "#app/directory/operation.schema.ts";
import { listOperations } from "#app/directory/operation-list.server.ts";
import { findingSorts, FindingsQuery } from "#app/review/findings.schema.ts";
import { listFindings } from "#app/review/findings.server.ts";
import { CodingQuery, readCoding } from "#app/routes/desk/parts/checks/coding.server.ts";
import { asDesk, draftOf, openSurveysDatabase } from "./surveys-fixture.ts";

const { owner, iowa, both } = await openSurveysDatabase();

/** Of these every tenth is another state's at first, and comes in while somebody turns the pages. */
const made = 240;

/** Growers with much in common, so that most sort values are shared; two of three have answered, and some of those oddly. */
async function addGrowers(): Promise<void> {
	await owner.query(
		`with n as (select i, gen_random_uuid() as owner_id, gen_random_uuid() as operation_id from generate_series(1, $1) i),
		w as (insert into directory.owner (owner_id, name) select owner_id, 'Owner ' || i from n),
		o as (insert into directory.operation (operation_id, owner_id, name, county_fips, state_fips, contact_name, phone)
			select operation_id, owner_id, 'Orchard ' || i % 40, case when i % 10 = 0 then '55025' when i % 3 = 0 then '19001' else '19103' end,
				case when i % 10 = 0 then '55' else '19' end, 'Contact ' || i % 7, case when i % 4 > 0 then '555 01' || i end
			from n)
		insert into directory.planting (operation_id, crop_key, bearing_trees) select operation_id, 'apple', 10 + i % 5 from n`,
		[made],
	);
}

/** By the number in the owner's name; everything that a list could sort by is set, or left empty, for some. */
async function answerSome(surveyId: string): Promise<void> {
	await owner.query(
		`with n as (select o.operation_id, o.state_fips, substr(w.name, 7)::int as i
			from directory.operation o join directory.owner w using (owner_id)),
		r as (insert into collect.response (survey_id, operation_id, state_fips, language, pledge_version, submitted_version,
				receipt_code, first_submitted_at, submitted_at)
			select $1, operation_id, state_fips, 'en', '1', 1, 'R' || i, now() + i % 30 * interval '1 microsecond',
				now() + i % 30 * interval '1 microsecond' from n where i % 3 > 0 returning response_id, operation_id),
		s as (insert into collect.submission (response_id, version, answers)
			select response_id, 1, jsonb_build_object('answers', jsonb_build_array(jsonb_build_object('questionKey', 'other_cause',
				'plantingId', null, 'kind', 'given', 'value', 'words of ' || operation_id))) from r),
		e as (insert into collect.edit_finding (response_id, check_kind, check_key, question_key, about, about_key, effect, made_at)
			select response_id, (array['range', 'sum', 'logic'])[i % 3 + 1], 'check', 'harvested', '[]', '', 
				case when i % 4 > 0 then (i % 9) / 7.0 end, now() + i % 20 * interval '1 microsecond' from r join n using (operation_id)),
		f as (update collect.frame_operation f set disposition = (array['not_reached', 'partial', 'reached', 'undeliverable'])[i % 4 + 1]
			from n where n.operation_id = f.operation_id and f.survey_id = $1 returning f.operation_id)
		insert into collect.contact (operation_id, survey_id, person_id, way, outcome, next_on, next_time)
			select operation_id, $1, $2, 'telephone', 'call_back', current_date - 30 - i % 2, case when i % 4 > 1 then time '09:30' end
			from n where i % 5 < 2`,
		[surveyId, iowa.personId],
	);
}

/** Takes growers out of the viewer's sight with all that is theirs, or into it. */
async function move(operationIds: string[], state: "19" | "55"): Promise<void> {
	const number = "(select substr(name, 7)::int from directory.owner w where w.owner_id = t.owner_id)";
	const county = state === "55" ? "'55025'" : `case when ${number} % 3 = 0 then '19001' else '19103' end`;
	for (const table of ["directory.operation", "collect.frame_operation"])
		await owner.query(`update ${table} t set state_fips = $2, county_fips = ${county} where operation_id = any ($1)`, [
			operationIds,
			state,
		]);
	await owner.query("update collect.response set state_fips = $2 where operation_id = any ($1)", [operationIds, state]);
}

async function prepare() {
	await addGrowers();
	const { surveyId } = await asDesk(both, (trx) => createSurvey(trx, both, draftOf(["19", "55"])));
	await asDesk(both, (trx) => openSurvey(trx, both, surveyId!));
	await answerSome(surveyId!);
	const { rows } = await owner.query<{ operation_id: string }>(
		"select operation_id from directory.operation where state_fips = '55'",
	);
	const cells = await asDesk(iowa, (trx) => listCallCells(trx, iowa, surveyId!));
	return {
		surveyId: surveyId!,
		spares: rows.map((row) => row.operation_id),
		cells: cells.map((cell, i) => ({ ...cell, worth: (i % 3) / 3, share: 0.1 })),
	};
}
const { surveyId, spares, cells } = await prepare();

type Address = Record<string, string>;
type Seen = { rows: { operationId: string }[]; before: string | null; after: string | null };
type List = (trx: Trx, address: Address) => Promise<Seen>;

const lists: Record<string, { list: List; sorts: readonly string[] }> = {
	growers: {
		list: (trx, address) => listOperations(trx, iowa, OperationQuery.parse(address)),
		sorts: ["name", "owner", "county", "trees"],
	},
	"who has answered": {
		list: (trx, address) => listFrame(trx, iowa, surveyId, FrameQuery.parse(address)),
		sorts: ["name", "county", "disposition", "answered"],
	},
	"calls to make": {
		list: (trx, address) => listCalls(trx, iowa, surveyId, CallQuery.parse({ show: "all", ...address }), cells),
		sorts: [""],
	},
	"paper forms": {
		list: async (trx, address) => {
			const papers = await listPaperForms(trx, iowa, { surveyId }, PaperQuery.parse(address));
			return { ...papers!, rows: papers!.forms };
		},
		sorts: [""],
	},
	"odd answers": {
		list: (trx, address) => listFindings(trx, iowa, surveyId, FindingsQuery.parse(address)),
		sorts: findingSorts,
	},
	"words to be coded": {
		list: async (trx, address) => (await readCoding(trx, iowa, surveyId, CodingQuery.parse(address)))!,
		sorts: [""],
	},
};

const idsOf = ({ rows }: Seen) => rows.map(({ operationId }) => operationId);

/** Goes from page to page, one way or the other, and calls `meanwhile` between two pages with what was seen so far. */
async function walk(
	list: (address: Address) => Promise<Seen>,
	{ from, way }: { from: Address; way: "after" | "before" },
	meanwhile: (seen: string[]) => Promise<void> = async () => {},
): Promise<{ ids: string[]; address: Address; pages: number }> {
	let address = from;
	const ids: string[] = [];
	for (let pages = 1; pages < 20; pages++) {
		const page = await list(address);
		ids.push(...idsOf(page));
		const next = page[way];
		if (next === null) return { ids, address, pages };
		await meanwhile(ids);
		address = { [way]: next };
	}
	throw new Error("the pages go on for ever");
}

describe.each(Object.entries(lists))("the list of %s", (_name, { list, sorts }) => {
	const orders = sorts.flatMap((sort) =>
		(sort ? (["asc", "desc"] as const) : ([""] as const)).map((direction) => ({ sort, direction })),
	);
	test.each(orders)("$sort $direction: shows none twice and leaves none out while rows come and go", async (order) => {
		const read = (address: Address) =>
			asDesk(iowa, (trx) => list(trx, order.sort ? { ...order, ...address } : address));
		const { ids: whole, address: lastPage, pages } = await walk(read, { from: {}, way: "after" });
		expect(new Set(whole).size).toBe(whole.length);
		expect(pages).toBeGreaterThan(1);

		// Upward from page to page, downward back from the last; a list of one order both ways.
		const ways = { asc: ["after"], desc: ["before"], "": ["after", "before"] } as const;
		for (const way of ways[order.direction]) {
			const gone = new Set<string>();
			const come = [...spares];
			const { ids } = await walk(read, { from: way === "after" ? {} : lastPage, way }, async (seen) => {
				const here = whole.filter((id) => !gone.has(id));
				const left = here.filter((id) => !seen.includes(id));
				// Never all that is left: a page that is gone is not shown, but the nearest one.
				const leaving = [here.find((id) => seen.includes(id))!, ...left.slice(1 + left.length / 2).slice(0, 1)];
				leaving.forEach((id) => gone.add(id));
				await move(leaving, "55");
				await move(come.splice(0, 4), "19");
			});
			expect(gone.size).toBeGreaterThan(1);
			expect(new Set(ids).size).toBe(ids.length);
			expect(whole.filter((id) => !gone.has(id) && !ids.includes(id))).toEqual([]);
			await move([...gone], "19");
			await move(spares, "55");
		}
	});
});

const growers = (address: Address) => asDesk(iowa, (trx) => lists.growers!.list(trx, address));

test("an address that was mended by hand, or is of another order, shows the first page", async () => {
	const first = idsOf(await growers({}));
	const wrong = [
		"x",
		"{}",
		"[]",
		'["Orchard 1"]',
		'["Orchard 1","no id"]',
		'[1,"4e4a4e9b-68c1-4a9a-b0a2-bb0a3b4f8a11"]',
	];
	for (const after of [...wrong, String.raw`["a\u0000","4e4a4e9b-68c1-4a9a-b0a2-bb0a3b4f8a11"]`])
		expect(idsOf(await growers({ after }))).toEqual(first);
	const far = '["Zzz","4e4a4e9b-68c1-4a9a-b0a2-bb0a3b4f8a11"]';
	const last = await growers({ after: far });
	expect([last.rows.length > 0, last.after]).toEqual([true, null]);
});

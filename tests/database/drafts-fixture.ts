import type { Client } from "pg";
import { addPerson } from "./surveys-fixture.ts";

export type NewDraft = {
	status: string;
	audit?: { passed: boolean } | null;
	checksum?: string | null;
	publishedChecksum?: string | null;
	/** For a scheduled one, in SQL. */
	publishAt?: string;
};

/** A draft of a release as a row of its own, with a closed survey that nobody was asked in. */
export async function addDraft(
	owner: Client,
	{ status, audit = null, checksum = null, publishedChecksum = null, publishAt = "now()" }: NewDraft,
): Promise<string> {
	const { personId } = await addPerson(owner, "Ines Rowan", ["19"]);
	const approver = status === "scheduled" ? (await addPerson(owner, "Marek Vance", [])).personId : null;
	const { rows } = await owner.query(
		`with f as (insert into collect.form (form_key) values ('form_' || translate(md5(random()::text), '0123456789', 'ghijklmnop')) returning form_id),
			v as (insert into collect.form_version (form_id, version, definition) select form_id, 1, '{}' from f
				returning form_version_id),
			s as (insert into collect.survey (form_version_id, season, title, crop_keys, closes_at)
				select form_version_id, 2031, '{}', '{apple}', now() from v returning survey_id)
		insert into collect.release_draft (survey_id, status, rules, audit, checksum, published_checksum, drafted_by,
			decided_by, decided_at, publish_at)
		select survey_id, $1, '{}', $2, $3, $4, $5, $6::uuid, case when $6 is not null then now() end,
			case when $6 is not null then ${publishAt} end
		from s returning release_draft_id`,
		[status, audit && JSON.stringify(audit), checksum, publishedChecksum, personId, approver],
	);
	return rows[0].release_draft_id as string;
}

import { type Kysely, sql } from "kysely";

// What a photo showed is told in words beside it. When the photo is taken away these go with it, out of published versions too:
// the second and last change that such a version takes.
export async function up(db: Kysely<unknown>): Promise<void> {
	await sql`create function publish.without_words_of_gone(content jsonb) returns jsonb language sql stable as $$
		select case when jsonb_typeof(content -> 'blocks') = 'array' then jsonb_set(content, '{blocks}', (
			select coalesce(jsonb_agg(case when gone.report_photo_id is null then block
				else block || '{"alt": {"en": "Photo taken away", "es": "Foto retirada"}}' end order by place), '[]')
			from jsonb_array_elements(content -> 'blocks') with ordinality as b (block, place)
				left join publish.report_photo gone on gone.report_photo_id::text = block ->> 'photo'
					and block ->> 'type' = 'photo' and gone.taken_away_at is not null))
			else content end $$`.execute(db);
	await sql`create function publish.empty_words_of_gone() returns trigger language plpgsql as $$
		begin
			new.content := publish.without_words_of_gone(new.content);
			return new;
		end $$`.execute(db);
	// Triggers of a table run in the order of their names: this one before "frozen".
	await sql`create trigger empty_words_of_gone before insert or update of content on publish.report
		for each row execute function publish.empty_words_of_gone()`.execute(db);
	await sql`create trigger empty_words_of_gone before insert or update of content on publish.report_edit
		for each row execute function publish.empty_words_of_gone()`.execute(db);

	await sql`create or replace function publish.refuse_change() returns trigger language plpgsql as $$
		begin
			if tg_op = 'UPDATE' and to_jsonb(new) - 'content' = to_jsonb(old) - 'content'
				and new.content = publish.without_words_of_gone(old.content) then return new; end if;
			raise exception 'published_report_is_frozen' using errcode = 'insufficient_privilege';
		end $$`.execute(db);

	await sql`create function publish.take_words_of_gone() returns trigger language plpgsql as $$
		declare shows jsonb := jsonb_build_object('blocks', jsonb_build_array(jsonb_build_object('photo', new.report_photo_id)));
		begin
			update publish.report set content = content where content @> shows;
			update publish.report_edit set content = content where content @> shows;
			return null;
		end $$`.execute(db);
	await sql`create trigger words_go_too after update of taken_away_at on publish.report_photo
		for each row execute function publish.take_words_of_gone()`.execute(db);

	await sql`update publish.report set content = content`.execute(db);
	await sql`update publish.report_edit set content = content`.execute(db);
}

import { describe, expect, test } from "vitest";
import { type Scope, scopedTransaction } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { findQuestion, type FormDraft } from "#app/collect/editing/draft.ts";
import { addQuestion, removeQuestion, replaceQuestion } from "#app/collect/editing/edit-questions.ts";
import { type Change, createForm, dropForm, undoChange } from "#app/collect/editing/form-drafts.server.ts";
import { listForms } from "#app/collect/editing/form-list.server.ts";
import { listVersions, moveSurvey, publishForm, resetDraft } from "#app/collect/editing/form-versions.server.ts";
import { findSurveyForm } from "#app/collect/forms.server.ts";
import { openSurvey } from "#app/collect/survey-opening.server.ts";
import { createSurvey } from "#app/collect/surveys.server.ts";
import { change, find, makeForm, publish, title } from "./forms-editor-fixture.ts";
import { addOperation, asDesk, count, draftOf, openSurveysDatabase } from "./surveys-fixture.ts";

const { owner, iowa, other: colleague, wisconsin } = await openSurveysDatabase();

const spotIn = (draft: FormDraft) => ({ screen: draft.screens[0]!.key });

/** An open survey of Iowa that asks the form's newest version, and one operation in its frame. */
async function openOn(formId: string): Promise<{ surveyId: string; operationId: string }> {
	const operationId = await addOperation(owner, { state: "19" });
	const formKey = (await find(iowa, formId))!.draft.key;
	const surveyId = await asDesk(iowa, async (trx) => {
		const made = await createSurvey(trx, iowa, draftOf(["19"], { formKey }));
		if (!("surveyId" in made) || !made.surveyId) throw new Error(JSON.stringify(made));
		await openSurvey(trx, iowa, made.surveyId, async () => {});
		return made.surveyId;
	});
	return { surveyId, operationId };
}

async function answer({ surveyId, operationId }: { surveyId: string; operationId: string }): Promise<void> {
	await owner.query(
		`with r as (insert into collect.response (survey_id, operation_id, state_fips, language, pledge_version)
			values ($1, $2, '19', 'en', '1') returning response_id, state_fips)
		insert into collect.answer (response_id, question_key, kind, value)
		select response_id, 'trees_hit', 'given', '12' from r`,
		[surveyId, operationId],
	);
}

describe("a form", () => {
	test("is begun as a copy of a ready one, with a key of its own, and the ready one stays as it is", async () => {
		const name = { en: "After harvest", es: "Después de la cosecha" };
		const formId = await asDesk(iowa, (trx) => createForm(trx, iowa, name, "after_harvest"));
		const form = await find(iowa, formId);
		expect(form).toMatchObject({ mayEdit: true, edit: 1, published: null, stateFips: ["19"] });
		expect(form!.draft.key).toBe("after_harvest_b");
		await change(iowa, formId, (draft) => removeQuestion(draft, "harvested", new Set()));
		const left = await find(iowa, formId);
		expect(findQuestion(left!.draft, "harvested")).toBeUndefined();
		expect(left!.draft.measures.map(({ key }) => key)).not.toContain("crop_loss");
		expect(findQuestion((await find(iowa, "after_harvest"))!.draft, "harvested")).toBeDefined();
		expect(await asDesk(iowa, (trx) => createForm(trx, iowa, name, "no_such_form"))).toBe("not_found");
	});

	test("is read and copied by associates of other states, and changed by those of its own alone", async () => {
		const formId = await makeForm(iowa);
		expect(await find(wisconsin, formId)).toMatchObject({ mayEdit: false, makerName: "Iowa's associate" });
		expect(await change(wisconsin, formId, (draft) => ({ ...draft, title }))).toBe("not_found");
		expect(await publish(wisconsin, formId)).toBe("not_found");
		expect(await asDesk(wisconsin, (trx) => dropForm(trx, wisconsin, formId))).toBe("not_found");
		const copy = await asDesk(wisconsin, (trx) => createForm(trx, wisconsin, title, formId));
		expect(await find(wisconsin, copy)).toMatchObject({ mayEdit: true, stateFips: ["55"] });
		expect(await find(colleague, formId)).toMatchObject({ mayEdit: true });
		const renamed = await change(colleague, formId, (draft) => ({
			...draft,
			title: { en: "Big hail", es: "Granizo" },
		}));
		expect(renamed).toMatchObject({ outcome: "changed" });
		const listed = await asDesk(wisconsin, (trx) => listForms(trx, wisconsin));
		expect(listed.find((form) => form.formId === formId)).toMatchObject({ mayEdit: false, title: { en: "Big hail" } });
		expect(listed.slice(0, 4).every(({ isReady }) => isReady)).toBe(true);
	});

	test("that was never published can be taken away, and one that was cannot", async () => {
		const formId = await makeForm(iowa);
		expect(await asDesk(iowa, (trx) => dropForm(trx, iowa, formId))).toBe("dropped");
		expect(await count(owner, "collect.form where form_id = $1", [formId])).toBe(0);
		const kept = await makeForm(iowa);
		await publish(iowa, kept);
		expect(await asDesk(iowa, (trx) => dropForm(trx, iowa, kept))).toBe("published");
		expect(await count(owner, "collect.form where form_id = $1", [kept])).toBe(1);
	});
});

describe("a change", () => {
	test("is undone and done again, and not where somebody has changed something since", async () => {
		const formId = await makeForm(iowa);
		const first = await find(iowa, formId);
		await change(iowa, formId, (draft) => removeQuestion(draft, "trees_hit", new Set()));
		const undo = (edit: number) => asDesk(iowa, (trx) => undoChange(trx, iowa, formId, edit));
		expect(await undo(first!.edit)).toBe("changed_meanwhile");
		expect(await undo(first!.edit + 1)).toBe("undone");
		expect((await find(iowa, formId))!.draft).toEqual(first!.draft);
		expect(await undo(first!.edit + 2)).toBe("undone");
		expect(findQuestion((await find(iowa, formId))!.draft, "trees_hit")).toBeUndefined();
	});

	test("by two at once is made by one after the other, and neither is lost", async () => {
		const formId = await makeForm(iowa);
		const add = (viewer: Associate, en: string) =>
			change(viewer, formId, (draft) => addQuestion(draft, spotIn(draft), "percent", { en, es: "Otra" }));
		const made = await Promise.all([add(iowa, "Fruit hit"), add(colleague, "Leaves hit")]);
		expect(made).toEqual([
			{ outcome: "changed", key: "fruit_hit" },
			{ outcome: "changed", key: "leaves_hit" },
		]);
		const keys = (await find(iowa, formId))!.draft.screens[0]!.questions.map(({ key }) => key);
		expect(keys.toSorted()).toEqual(["fruit_hit", "leaves_hit", "trees_hit"]);
	});
});

describe("a version", () => {
	test("is frozen when it is published, with measures for the questions that had none; twice is once", async () => {
		const formId = await makeForm(iowa);
		expect(await publish(iowa, formId)).toEqual({ outcome: "published", version: 1 });
		expect(await publish(iowa, formId)).toEqual({ outcome: "unchanged", version: 1 });
		const { published } = (await find(iowa, formId))!;
		expect(published?.definition.measures.map(({ key }) => key)).toEqual(["trees_hit", "base.trees_hit"]);
		const rewrite = scopedTransaction({ kind: "network" }, (trx) =>
			trx.updateTable("collect.form_version").set({ version: 9 }).where("form_id", "=", formId).execute(),
		);
		await expect(rewrite).rejects.toMatchObject({ code: "42501" });
	});

	test("is not made of a draft that lacks a translation, nor of one that somebody changed since it was read", async () => {
		const formId = await makeForm(iowa);
		const before = await find(iowa, formId);
		await change(iowa, formId, (draft) => ({ ...draft, title: { en: "Hail", es: "" } }));
		expect(await publish(iowa, formId)).toBe("unfinished");
		const late = await asDesk(iowa, (trx) => publishForm(trx, iowa, formId, before!.edit));
		expect(late).toBe("changed_meanwhile");
		expect(await count(owner, "collect.form_version where form_id = $1", [formId])).toBe(0);
	});

	test("keeps the questions that have answers, whatever is done to them", async () => {
		const formId = await makeForm(iowa);
		await publish(iowa, formId);
		await answer(await openOn(formId));
		expect((await find(iowa, formId))!.held).toEqual(["trees_hit"]);
		expect(await change(iowa, formId, (draft, held) => removeQuestion(draft, "trees_hit", held))).toBe("answered");
		const question = findQuestion((await find(iowa, formId))!.draft, "trees_hit")!.question;
		const turned = { ...question, type: "percent", unitFamily: undefined } as unknown as typeof question;
		expect(await change(iowa, formId, (draft, held) => replaceQuestion(draft, turned, held))).toBe("answered");
		// Whoever gets around the edits still meets the check before a version is published.
		const other = { en: "Fruit hit", es: "Fruta dañada" };
		const instead: Change = (draft) =>
			addQuestion({ ...draft, screens: [{ ...draft.screens[0]!, questions: [] }] }, spotIn(draft), "percent", other);
		expect(await change(iowa, formId, instead)).toEqual({ outcome: "changed", key: "fruit_hit" });
		expect(await publish(iowa, formId)).toBe("unfinished");
	});

	test("is kept by a survey until somebody lets it go over, and an open one takes other words alone", async () => {
		const formId = await makeForm(iowa);
		await publish(iowa, formId);
		const { surveyId } = await openOn(formId);
		const words = { en: "Trees hit by hail", es: "Árboles dañados por granizo" };
		const reworded = (draft: FormDraft) =>
			replaceQuestion(draft, { ...findQuestion(draft, "trees_hit")!.question, text: words }, new Set());
		await change(iowa, formId, reworded);
		await publish(iowa, formId);
		const asked = async () =>
			(await asDesk(iowa, (trx) => findSurveyForm(trx, surveyId)))!.screens[0]!.questions.map(({ text }) => text.en);
		expect(await asked()).toEqual(["Trees hit"]);

		const [newest, first] = await asDesk(iowa, (trx) => listVersions(trx, iowa, formId));
		expect(newest!.differences).toContainEqual(
			expect.objectContaining({ kind: "question_text", language: "en", before: "Trees hit", after: words.en }),
		);
		expect(first!.surveys).toEqual([expect.objectContaining({ surveyId, state: "open", mayMove: true })]);
		const move = (viewer: Associate) => asDesk(viewer, (trx) => moveSurvey(trx, viewer, formId, surveyId));
		expect(await move(wisconsin)).toBe("not_found");
		expect(await move(iowa)).toBe("moved");
		expect(await asked()).toEqual([words.en]);

		await change(iowa, formId, (draft) => addQuestion(draft, spotIn(draft), "percent", { en: "Fruit", es: "Fruta" }));
		await publish(iowa, formId);
		expect(await move(iowa)).toBe("keeps_version");
		expect(await asked()).toEqual([words.en]);
	});

	test("comes back into the draft when changes are given up, and that can be undone", async () => {
		const formId = await makeForm(iowa);
		await publish(iowa, formId);
		const whole = (await find(iowa, formId))!.draft;
		await change(iowa, formId, (draft) => removeQuestion(draft, "trees_hit", new Set()));
		await asDesk(iowa, (trx) => resetDraft(trx, iowa, formId));
		expect((await find(iowa, formId))!.draft).toEqual(whole);
	});
});

const asScope = (scope: Scope, table: string, formId: string) =>
	scopedTransaction(scope, async (trx) => {
		const name = table as "collect.form";
		const rows = await trx.selectFrom(name).select("form_id").where("form_id", "=", formId).execute();
		return rows.length;
	});

describe("the rows of forms", () => {
	test("of a draft are no grower's and nobody's without a scope, while versions are read by all", async () => {
		const formId = await makeForm(iowa);
		await publish(iowa, formId);
		const grower: Scope = { kind: "grower", operationIds: [await addOperation(owner, { state: "19" })] };
		expect(await count(owner, "collect.form_draft where form_id = $1", [formId])).toBe(1);
		for (const scope of [grower, { kind: "none" } as const]) {
			expect(await asScope(scope, "collect.form_draft", formId)).toBe(0);
			expect(await asScope(scope, "collect.form_version", formId)).toBe(1);
		}
		expect(await asScope({ kind: "desk", stateFips: ["55"] }, "collect.form_draft", formId)).toBe(1);
	});

	test("are written at the desks of their states, by no other desk and no grower", async () => {
		const formId = await makeForm(iowa);
		const touch = (scope: Scope) =>
			scopedTransaction(scope, async (trx) => {
				const draft = await trx
					.updateTable("collect.form_draft")
					.set({ edit: 7 })
					.where("form_id", "=", formId)
					.executeTakeFirst();
				const form = await trx.deleteFrom("collect.form").where("form_id", "=", formId).executeTakeFirst();
				return [Number(draft.numUpdatedRows), Number(form.numDeletedRows)];
			});
		const others: Scope[] = [
			{ kind: "desk", stateFips: ["55"] },
			{ kind: "desk", stateFips: [] },
			{ kind: "grower", operationIds: [] },
			{ kind: "none" },
		];
		for (const scope of others) {
			expect(await touch(scope)).toEqual([0, 0]);
			const publishing = scopedTransaction(scope, (trx) =>
				trx.insertInto("collect.form_version").values({ form_id: formId, version: 1, definition: "{}" }).execute(),
			);
			await expect(publishing).rejects.toMatchObject({ code: "42501" });
		}
		expect(await count(owner, "collect.form_draft where form_id = $1 and edit < 7", [formId])).toBe(1);
		expect(await touch({ kind: "desk", stateFips: ["19"] })).toEqual([1, 1]);
	});

	test("are not begun for a state that is not granted", async () => {
		const begin = asDesk(iowa, (trx) =>
			trx
				.insertInto("collect.form")
				.values({ form_key: "borrowed", made_by: iowa.personId, state_fips: ["55"] })
				.execute(),
		);
		await expect(begin).rejects.toMatchObject({ code: "42501" });
	});
});

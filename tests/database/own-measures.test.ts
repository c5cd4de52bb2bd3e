import { expect, test } from "vitest";
import type { Question } from "#app/collect/form.ts";
import { addQuestion } from "#app/collect/editing/edit-questions.ts";
import { addScreen } from "#app/collect/editing/edit-screens.ts";
import type { FormDraft } from "#app/collect/editing/draft.ts";
import { createForm } from "#app/collect/editing/form-drafts.server.ts";
import { openSurvey } from "#app/collect/survey-opening.server.ts";
import { createSurvey } from "#app/collect/surveys.server.ts";
import { listDraftEstimates } from "#app/routes/desk/parts/estimates/draft-estimates.server.ts";
import { EstimatesQuery } from "#app/routes/desk/parts/estimates/estimates.schema.ts";
import { findFigureOrigin } from "#app/routes/desk/parts/estimates/figure-origin.server.ts";
import { beginAnswering, growerOf, submit, typeStep } from "./answering-fixture.ts";
import { change, publish } from "./forms-editor-fixture.ts";
import { addOperation, asDesk, draftOf, openSurveysDatabase } from "./surveys-fixture.ts";

const { owner, iowa } = await openSurveysDatabase();

function withQuestions(draft: FormDraft): FormDraft {
	const screened = addScreen(draft, { en: "Sales", es: "Ventas" }, false);
	const texts: [Question["type"], string][] = [["number", "Boxes sold"], ["percent", "Sold fresh"], ["date", "First sale"]]; // prettier-ignore
	return texts.reduce((at, [type, text]) => {
		const made = addQuestion(at, { screen: screened.key }, type, { en: text, es: text });
		if (typeof made === "string") throw new Error(made);
		return made.draft;
	}, screened.draft);
}

test("questions of an associate's own form are estimated with nothing declared, as one gets by hand", async () => {
	const told = [
		{ boxes: "10", fresh: "20", sold: "2031-08-01" },
		{ boxes: "30", fresh: "40", sold: "2031-08-11" },
		{ boxes: "50", fresh: "90", sold: "2031-08-21" },
	];
	const operationIds: string[] = [];
	while (operationIds.length < 6) operationIds.push(await addOperation(owner, { state: "19" }));
	const formId = await asDesk(iowa, (trx) => createForm(trx, iowa, { en: "Sales", es: "Ventas" }));
	await change(iowa, formId, withQuestions);
	await publish(iowa, formId);
	const { rows } = await owner.query("select form_key from collect.form where form_id = $1", [formId]);
	const surveyId = await asDesk(iowa, async (trx) => {
		const made = await createSurvey(trx, iowa, draftOf(["19"], { formKey: rows[0].form_key }));
		const { surveyId: opened } = made as { surveyId: string };
		expect(await openSurvey(trx, iowa, opened)).toBe("opened");
		return opened;
	});
	for (const [at, { boxes, fresh, sold }] of told.entries()) {
		const place = { surveyId, operationId: operationIds[at]! };
		const grower = growerOf(place.operationId);
		await beginAnswering(grower, place);
		const values = { boxes_sold: boxes, sold_fresh: fresh, first_sale: sold };
		expect(await typeStep(grower, place, "sales", values)).toBe("saved");
		expect(await submit(grower, place)).toMatchObject({ outcome: "submitted" });
	}

	const query = EstimatesQuery.parse({ crop: "all" });
	const listed = await asDesk(iowa, (trx) => listDraftEstimates(trx, iowa, surveyId, query));
	const { figures } = listed!.rows.find(({ area }) => area.key === "19")!;
	const figureOf = (key: string) => figures.find(({ measureKey }) => measureKey === key)!;
	// Three of six: weight 2 and half of the spread is left; deviations of 20 about the mean.
	const mean = figureOf("boxes_sold");
	expect(mean).toMatchObject({ respondents: 3, missing: null });
	expect(mean.value).toBeCloseTo(30, 9);
	expect(mean.standardError).toBeCloseTo(Math.sqrt((1 - 3 / 6) * (800 / 2 / 3)), 9);
	expect(figureOf("sold_fresh").value).toBeCloseTo(50, 9);
	// August 11 of a common year.
	expect(figureOf("first_sale")).toMatchObject({ value: 223, quartiles: { first: 213, third: 233 } });
	const place = { surveyId, areaKey: "19", cropKey: "all", measureKey: "boxes_sold" };
	const found = await asDesk(iowa, (trx) => findFigureOrigin(trx, iowa, place));
	expect(found!.origin.strata).toMatchObject([{ frameSize: 6, respondents: 3, weight: 2 }]);
});

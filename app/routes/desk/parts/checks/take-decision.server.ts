import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import type { StepValues } from "#app/collect/posted.ts";
import { readQuestion } from "#app/collect/read-question.ts";
import type { Problem } from "#app/lib/parse-form.ts";
import { decidedElsewhere } from "#app/review/corrections.server.ts";
import type { Decision } from "#app/review/findings.schema.ts";
import { didLastStep, findFinding } from "#app/review/findings.server.ts";
import { type Correction, placeOf } from "#app/review/reviewed-answers.ts";
import { todayIn } from "../../../grower/parts/answering.server.ts";
import { askGrower, type AskRefused } from "./ask.server.ts";
import { type Decided, decideFinding, type FindingPlace } from "./decide.server.ts";
import { type FindingView, viewFinding } from "./finding-view.server.ts";
import { mustBeAnswered } from "./must-be-answered.ts";

type Taken =
	| { outcome: Decided | AskRefused | "changed_by_you" }
	| { outcome: "problems"; problems: Problem[] }
	| { outcome: "preview"; moved: FindingView["moved"] };

/** Does what was sent with a finding, or tells what it would come to. @param values every field that was sent. */
export async function takeDecision(
	trx: Trx,
	viewer: Associate,
	place: FindingPlace,
	decision: Decision,
	{ values, language }: { values: StepValues; language: "en" | "es" },
): Promise<Taken> {
	const taken = await takeFrom(trx, viewer, place, decision, { values, language });
	const isOwn = taken.outcome === "changed" && (await wasOwnWindow(trx, viewer, place, decision));
	return isOwn ? { outcome: "changed_by_you" } : taken;
}

/** Whether the page that sent this was overtaken by the same person's own doing in another window. */
async function wasOwnWindow(trx: Trx, viewer: Associate, { surveyId, findingId }: FindingPlace, decision: Decision) {
	const finding = await findFinding(trx, viewer, surveyId, findingId);
	if (!finding) return false;
	if (finding.version !== decision.version) return didLastStep(trx, viewer, findingId);
	const about = "at" in decision ? finding.about[decision.at] : undefined;
	if (!about || !("seen" in decision)) return false;
	return decidedElsewhere(trx, viewer, { ...placeOf(about), responseId: finding.responseId, seen: decision.seen });
}

async function takeFrom(
	trx: Trx,
	viewer: Associate,
	place: FindingPlace,
	decision: Decision,
	{ values, language }: { values: StepValues; language: "en" | "es" },
): Promise<Taken> {
	if (decision.act === "ask") return { outcome: await askGrower(trx, viewer, place, decision.version) };
	if (decision.act !== "correct" && decision.act !== "preview")
		return { outcome: await decideFinding(trx, viewer, place, decision) };
	const view = await viewFinding(trx, viewer, place);
	const about = view?.answers[decision.at];
	if (!view || !about?.question) return { outcome: "not_found" };
	const { question, planting } = about;
	const { timeZone } = view.finding;
	const settings = { language, season: view.season, today: todayIn(timeZone) };
	const read = readQuestion(mustBeAnswered(question), planting?.bushelLb ?? null, values, settings);
	if ("code" in read) {
		const { box, ...problem } = read;
		return { outcome: "problems", problems: [{ field: box ? `${question.key}_${box}` : question.key, ...problem }] };
	}
	const { answer } = read;
	// A photo is no answer that could be corrected.
	if (answer === null) return { outcome: "not_found" };
	if (decision.act === "correct")
		return { outcome: await decideFinding(trx, viewer, place, { ...decision, act: "correct", answer }) };
	const own = view.finding.about[decision.at]!;
	const proposed: Correction = { ...about.place, act: "corrected", was: about.told ?? own, answer };
	const previewed = await viewFinding(trx, viewer, place, proposed);
	return previewed ? { outcome: "preview", moved: previewed.moved } : { outcome: "not_found" };
}

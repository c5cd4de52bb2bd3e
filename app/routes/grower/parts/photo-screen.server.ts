import { randomUUID } from "node:crypto";
import { data, href, redirect, type RouterContextProvider } from "react-router";
import { requireGrower } from "#app/auth/guard.server.ts";
import type { PhotoProblem } from "#app/collect/photo.ts";
import { showStep } from "#app/collect/show-step.ts";
import { type AskedStep, findStep } from "#app/collect/steps.ts";
import { getLanguage } from "#app/i18n/middleware.server.ts";
import { refusal } from "#app/lib/refusal.ts";
import { getAnswering, type Place } from "./answering.server.ts";
import { nextAddress } from "./next-address.server.ts";
import { readPhotoForm } from "./photo-form.server.ts";
import { takeAway, takePhoto } from "./taking-photos.server.ts";

type Asked = { context: Readonly<RouterContextProvider>; params: Place & { screen: string }; request: Request };

/** Whether a screen was sent as forms with files are. */
export function holdsFiles(request: Request): boolean {
	return request.headers.get("content-type")?.startsWith("multipart/form-data") ?? false;
}

/**
 * A screen for photos as a browser without scripts sends it: keeps what was chosen, or takes one away, and goes on or shows
 * what could not be kept. With scripts the photos were sent before, and the form brings none.
 */
export async function takePhotoScreen({ context, params, request }: Asked) {
	const grower = requireGrower(context, params);
	const question = photoQuestionOf(findStep(await getAnswering(context, params), params.screen));
	if (!question) throw refusal("page_not_found");
	const { fields, problems } = await readPhotoForm(request, async (file) => {
		const named = { photoId: randomUUID(), questionKey: question.key };
		const taken = await takePhoto(grower, params, named, file);
		return "problem" in taken ? taken.problem : undefined;
	});
	const removed = fields.get("_remove");
	if (typeof removed === "string") await takeAway(grower, params, removed);
	if (problems.length > 0) return showProblems({ context, params, request }, question.key, problems);
	const stays = removed !== null || fields.has("_stay");
	const again = href("/answer/:surveyId/:operationId/ask/:screen", params) + new URL(request.url).search;
	return redirect(stays ? again : await nextAddress(context, params, request), 303);
}

function photoQuestionOf(asked: AskedStep | undefined) {
	return asked?.questions.find(({ type }) => type === "photo");
}

/** The screen as it stands now, with what could not be kept: each reason once, since files have no place to stand beside. */
async function showProblems({ context, params }: Asked, field: string, problems: PhotoProblem[]) {
	const answering = await getAnswering(context, params);
	const { massUnit, response } = answering;
	const settings = { massUnit, language: getLanguage(context) };
	const shown = showStep(answering, response?.stepChanges ?? {}, params.screen, settings);
	if (!shown) throw refusal("page_not_found");
	const { questions, values, version: seen } = shown;
	const reasons = [...new Map(problems.map((problem) => [problem.code, { field, ...problem }])).values()];
	return data({ values, questions, problems: reasons, seen, unsure: [], elsewhere: null }, { status: 400 });
}

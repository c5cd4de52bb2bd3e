import { z } from "zod";
import type { Access } from "#app/auth/guard.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { findSurvey } from "#app/collect/surveys.server.ts";
import { composeSample } from "#app/jobs/sample-mail.server.ts";
import { languages } from "#app/i18n/language.ts";
import { refusal } from "#app/lib/refusal.ts";
import { letterKinds } from "#app/mail/templates.ts";

const Query = z.object({ kind: z.enum(letterKinds), language: z.enum(languages).catch("en") });

/** The mail that an address of the preview asks for, composed as an invented grower would get it. */
export async function readSample(
	desk: Access<Associate>,
	request: Request,
	params: { surveyId: string; kind: string },
) {
	const language = new URL(request.url).searchParams.get("in");
	const query = Query.safeParse({ kind: params.kind, language });
	if (!query.success) throw refusal("page_not_found");
	const survey = await desk.transaction((trx) => findSurvey(trx, desk.viewer, params.surveyId));
	if (!survey) throw refusal("survey_not_found");
	return { ...query.data, mail: await composeSample({ survey, ...query.data }) };
}

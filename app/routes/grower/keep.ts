import { data } from "react-router";
import type { Route } from "./+types/keep";
import { requireGrower } from "#app/auth/guard.server.ts";
import { keepStep } from "#app/collect/keep-step.server.ts";
import { readWell } from "#app/collect/read-well.ts";
import { getLanguage } from "#app/i18n/middleware.server.ts";
import { refusal } from "#app/lib/refusal.ts";
import { getAnswering, todayIn } from "./parts/answering.server.ts";
import { readPosted } from "./parts/posted.server.ts";

/** What a page is told about a change that it sent while somebody types. */
export type KeptAnswer = {
	kept: boolean;
	/** The step's version as it now stands: the page's own, or when not kept that of another device. */
	version: number;
	/** Questions whose boxes hold what cannot be read yet; what was kept of them before stays. */
	unread: string[];
	/** Set when the survey has closed since it was begun: what is kept counts as late. */
	late?: boolean;
};

/**
 * Keeps a step as it is given. What cannot be read is no error yet: that is told when the grower goes on. The same change
 * again is harmless; one typed upon a version that another device has changed since is answered 409 and not kept.
 */
export async function action({ context, params, request }: Route.ActionArgs) {
	const grower = requireGrower(context, params);
	const { values, sent } = await readPosted(request);
	if (!sent) throw refusal("form_not_understood");
	const answering = await getAnswering(context, params);
	const read = readWell(answering, params.screen, values, {
		language: sent.language ?? getLanguage(context),
		season: answering.season,
		today: todayIn(answering.timeZone),
	});
	if (!read) throw refusal("page_not_found");
	const { answers, unread } = read;
	const kept = await grower.transaction((trx) =>
		keepStep(trx, grower.viewer, params, params.screen, answers, { sent, unread }),
	);
	if (kept === "closed") throw refusal("survey_closed");
	if (kept === "not_found" || kept === "not_started") throw refusal("survey_not_found");
	if (kept === "step_not_found") throw refusal("page_not_found");
	const isKept = kept.outcome !== "changed_elsewhere";
	const late = answering.isLate ? { late: true } : {};
	return data({ kept: isKept, version: kept.version, unread, ...late } satisfies KeptAnswer, {
		status: isKept ? 200 : 409,
	});
}

import { z } from "zod";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { noteContact } from "#app/collect/contacts.server.ts";
import { enterAnswers, type Entry, findEntry } from "#app/collect/entered-answers.server.ts";
import { endEntryDraft, keepEntryDraft } from "#app/collect/entry-drafts.server.ts";
import type { StepValues } from "#app/collect/posted.ts";
import { type EntryCheck, readEntry } from "#app/collect/read-entry.ts";
import { type Language, languages } from "#app/i18n/language.ts";
import type { Problem } from "#app/lib/parse-form.ts";
import { todayIn } from "../../../grower/parts/answering.server.ts";

/** `keep` comes by itself while one types, `leave` by a button; `send_all_the_same` after the grower has sent in meanwhile. */
const Step = z.enum(["keep", "leave", "drop", "send", "send_all_the_same"]);
const Head = z.object({ mode: z.enum(["telephone", "paper"]), language: z.enum(languages) });

type Place = { surveyId: string; operationId: string };
type Sent = { step: unknown; typed: StepValues; seen: number; pageLanguage: Language };
export type Taken =
	| { outcome: "not_found" | "closed" | "not_understood" | "kept" }
	| { outcome: "left" | "dropped" }
	| { outcome: "mend"; problems: Problem[]; checks: EntryCheck[] }
	| { outcome: "answered_meanwhile" }
	| { outcome: "sent"; receiptCode: string };

/** What an entry page asks for. Whatever is not sent in is kept as the associate's draft. */
export async function takeEntry(trx: Trx, viewer: Associate, place: Place, sent: Sent): Promise<Taken> {
	const step = Step.safeParse(sent.step);
	const head = Head.safeParse(sent.typed);
	if (!step.success || !head.success) return { outcome: "not_understood" };
	const entry = await findEntry(trx, viewer, place);
	if (!entry) return { outcome: "not_found" };
	if (step.data === "drop") {
		await endEntryDraft(trx, viewer, place);
		return { outcome: "dropped" };
	}
	await keepEntryDraft(trx, viewer, place, { mode: head.data.mode, typed: sent.typed });
	if (step.data === "keep") return { outcome: "kept" };
	if (step.data === "leave") return { outcome: "left" };
	return send(trx, viewer, place, entry, { ...sent, ...head.data, allTheSame: step.data === "send_all_the_same" });
}

type Ready = Sent & z.infer<typeof Head> & { allTheSame: boolean };

async function send(trx: Trx, viewer: Associate, place: Place, entry: Entry, ready: Ready): Promise<Taken> {
	const { typed, pageLanguage, mode, language, seen, allTheSame } = ready;
	if (!entry.isOpen && !entry.isLate) return { outcome: "closed" };
	const today = todayIn(entry.timeZone);
	const { answers, ...read } = readEntry(entry, typed, { language: pageLanguage, season: entry.season, today });
	const unread = entry.response === null && typed.pledge !== "on";
	const problems: Problem[] = [...(unread ? [{ field: "pledge", code: "pledge_unread" }] : []), ...read.problems];
	if (problems.length > 0 || read.checks.length > 0) return { outcome: "mend", problems, checks: read.checks };

	const outcome = await enterAnswers(trx, viewer, place, { answers, mode, language, seen, allTheSame });
	if (outcome === "answered_meanwhile") return { outcome };
	if (outcome === "not_found" || outcome === "not_started") return { outcome: "not_found" };
	if (outcome === "closed") return { outcome };
	// What a page can read it can send in: a form that changed in between is asked about anew.
	if (!("receiptCode" in outcome)) return { outcome: "not_understood" };
	if (mode === "telephone" && outcome.outcome === "submitted") {
		const call = { surveyId: place.surveyId, way: "telephone", outcome: "reached", note: "" } as const;
		await noteContact(trx, viewer, place.operationId, call);
	}
	return { outcome: "sent", receiptCode: outcome.receiptCode };
}

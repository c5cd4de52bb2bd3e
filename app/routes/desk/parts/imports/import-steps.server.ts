import { z } from "zod";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { isMassUnit } from "#app/collect/units.ts";
import { ImportChoices } from "#app/directory/import/columns.ts";
import { chooseForMatches } from "#app/directory/import/import-rows.server.ts";
import { beginStep, dropImport, lockImport } from "#app/directory/import/imports.server.ts";
import { queueJob } from "#app/jobs/queue.server.ts";
import { type FormValues, parseForm, type Problem } from "#app/lib/parse-form.ts";

const choice = z.enum(["create", "update", "skip"]);
const Step = z.discriminatedUnion("step", [
	ImportChoices.extend({
		step: z.literal("check"),
		massUnit: z.string("choice_wrong").refine(isMassUnit, "choice_wrong"),
	}),
	z.object({ step: z.literal("checking_again") }),
	z.object({ step: z.enum(["import", "importing_again"]) }),
	z.object({ step: z.enum(["undo", "undoing_again"]) }),
	z.object({ step: z.literal("all"), choice: z.enum(["update", "skip"]) }),
	z.object({ step: z.literal("rows"), row: z.array(z.object({ number: z.coerce.number().int(), choice })).max(60) }),
	z.object({ step: z.literal("drop") }),
]);

type Outcome =
	| "not_found"
	| "not_understood"
	| "dropped"
	| "kept"
	| "begun"
	| "under_way"
	| { values: FormValues; problems: Problem[] };

/** Does one step of an import in the caller's transaction; what takes long is queued there. */
export async function takeImportStep(trx: Trx, viewer: Associate, importId: string, sent: FormData): Promise<Outcome> {
	const form = parseForm(Step, sent);
	if (!form.ok)
		return form.values.step === "check" ? { values: form.values, problems: form.problems } : "not_understood";
	const { value: step } = form;
	switch (step.step) {
		case "drop":
			return dropImport(trx, viewer, importId);
		case "check": {
			const { step: _, ...choices } = step;
			return queued(trx, importId, "check", await beginStep(trx, viewer, importId, "checking", choices));
		}
		case "checking_again":
			return queued(trx, importId, "check", await beginStep(trx, viewer, importId, "checking"));
		case "import":
		case "importing_again":
			return queued(trx, importId, "write", await beginStep(trx, viewer, importId, "importing"));
		case "undo":
		case "undoing_again":
			return queued(trx, importId, "undo", await beginStep(trx, viewer, importId, "undoing"));
		case "all":
		case "rows": {
			const seen = await lockImport(trx, viewer, importId);
			if (seen?.status !== "checked") return seen ? "under_way" : "not_found";
			await chooseForMatches(trx, importId, step.step === "all" ? step.choice : step.row);
			return "kept";
		}
	}
}

async function queued(
	trx: Trx,
	importId: string,
	step: "check" | "write" | "undo",
	begun: "begun" | "not_found" | "under_way",
) {
	if (begun === "begun") await queueJob(trx, "import_growers", { importId, step }, { maxAttempts: 2 });
	return begun;
}

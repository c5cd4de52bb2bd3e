import { readFileSync } from "node:fs";
import { join } from "node:path";
import { type Address, listAddresses, paramsOf } from "#tests/helpers/addresses.ts";
import type { Target } from "./targets.ts";

const anything = {
	reason: "A reason.",
	reasonEn: "A reason.",
	reasonEs: "Una razón.",
	note: "A note.",
	publishOn: new Date(Date.now() + 86_400_000).toISOString().slice(0, 10),
	publishAt: "09:00",
};

/** Forms for an address: one that asks for publication, and one for each word by which its own schemas tell steps apart. */
export function formsFor({ file }: Address): Record<string, string>[] {
	const source = readFileSync(file, "utf8");
	const schemas = [...source.matchAll(/"#(app\/[\w/-]+(?:\.schema|\.server)?\.ts)"/g)].map(([, path]) =>
		readFileSync(join(import.meta.dirname, "../../..", path!), "utf8"),
	);
	const text = [source, ...schemas].join("\n");
	const steps = [...text.matchAll(/\b(step|decision|intent|act|do|reply): z\.(?:literal|enum)\(([^)]*)\)/g)].flatMap(
		([, name, words]) => [...words!.matchAll(/"(\w+)"/g)].map(([, word]) => [name!, word!] as const),
	);
	const told = new Map(steps.map(([name, word]) => [`${name} ${word}`, { ...anything, [name]: word }]));
	const asked = { ...anything, decision: "publish", intent: "publish", step: "publish", act: "publish" };
	return [asked, ...told.values()];
}

/** The pages on which drafts are made and decided, to which everybody posts everything. */
export const decidedOn = new Set(["desk/surveys/:surveyId/release", "network/releases/:draftId"]);

export const idsOf = ({ draftId, surveyId }: Target): Record<string, string> => ({
	...Object.fromEntries(["release", "reportId", "roleGrantId", "operationId", "formId"].map((name) => [name, draftId])),
	draftId,
	surveyId,
});
/** Signing out comes last, so that whoever asks is who they are. */
export const acting = async () =>
	(await listAddresses())
		.filter(({ acts }) => acts)
		.toSorted((a, b) => Number(a.path === "sign-out") - Number(b.path === "sign-out"));
export const aboutDrafts = ({ path }: Address) => paramsOf(path).some((name) => ["draftId", "surveyId"].includes(name));

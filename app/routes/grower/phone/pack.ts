import type { Answer, FormDefinition } from "#app/collect/form.ts";
import type { StepChanges } from "#app/collect/step-change.ts";
import type { PlantingAsked } from "#app/collect/steps.ts";
import type { EarlierAnswer } from "#app/collect/step-values.ts";
import type { MassUnit } from "#app/collect/units.ts";
import type { PageData } from "./page-data.ts";
import type { PhoneStore } from "./store.ts";

/** All that the pages of one opened survey need to be drawn without the server. */
export type Pack = {
	surveyId: string;
	operationId: string;
	responseId: string;
	holder: string;
	/** Changes when anything does that is not told by every page. */
	version: string;
	language: "en" | "es";
	/** The words of that language, by namespace. */
	words: Record<string, Record<string, unknown>>;
	definition: FormDefinition;
	plantings: PlantingAsked[];
	massUnit: MassUnit;
	crates: Record<string, number>;
	earlier: EarlierAnswer[];
	season: number;
	timeZone: string;
	/** The day at the operation when the server last said; a phone's clock may be behind. */
	today: string;
	closesAt: string;
	sent: boolean;
	answers: Answer[];
	changes: StepChanges;
};

export function isPack(found: unknown): found is Pack {
	const pack = found as Partial<Pack> | null;
	return (
		typeof pack?.responseId === "string" &&
		typeof pack.surveyId === "string" &&
		typeof pack.definition === "object" &&
		Array.isArray(pack.plantings) &&
		Array.isArray(pack.answers) &&
		Array.isArray(pack.earlier) &&
		typeof pack.words === "object"
	);
}

/** Keeps the pack of the open survey as new as its pages: its answers with each page, the rest when it has changed. */
export async function keepPack(store: PhoneStore, page: PageData): Promise<void> {
	const { responseId, holder, told } = page;
	if (responseId === null || !told) return;
	const held = (await store.listPacks()).find((pack) => pack.responseId === responseId);
	const { packVersion, ...news } = told;
	const pack = held?.version === packVersion ? held : await fetchPack(page);
	if (pack) await store.putPack({ ...pack, ...news, holder });
}

async function fetchPack({ surveyId, operationId }: PageData): Promise<Pack | undefined> {
	const response = await fetch(`/answer/${surveyId}/${operationId}/pack`).catch(() => null);
	const pack: unknown = response?.ok ? await response.json().catch(() => null) : null;
	return isPack(pack) ? pack : undefined;
}

import { listUnsettled } from "#app/collect/outbox.ts";
import { placeIn } from "./place.ts";
import type { PhoneStore } from "./store.ts";

/**
 * A survey that may not be opened any more cannot be drawn from this phone either. What was typed waits for the right link;
 * when the survey has closed there is nothing to wait for, and that is said.
 */
export async function startRefusedPage(store: PhoneStore): Promise<void> {
	const refused = document.getElementById("refused");
	const place = placeIn(location.pathname);
	if (!refused || !place) return;
	const isHere = (held: { surveyId: string; operationId: string }) =>
		held.surveyId === place.surveyId && held.operationId === place.operationId;
	for (const pack of (await store.listPacks()).filter(isHere)) await store.dropPack(pack.responseId);
	if (refused.dataset.code !== "survey_closed") return;
	for (const held of (await store.list()).filter(isHere)) {
		const isLate = held.outbox.sendIn || listUnsettled(held.outbox).length > 0;
		if (isLate) refused.textContent = refused.dataset.late ?? "";
		await store.change(held.responseId, () => undefined);
	}
}

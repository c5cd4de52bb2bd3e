import type { Trx } from "#app/auth/scope.server.ts";
import {
	changePlanting,
	type Keeper,
	type PlantingPlace,
	pullOutPlanting,
	splitPlanting,
} from "#app/directory/plantings.server.ts";
import type { PlantingStep } from "./planting-form.ts";

/** Does one step with a planting, for whoever keeps it. */
export async function takePlantingStep(trx: Trx, viewer: Keeper, place: PlantingPlace, step: PlantingStep) {
	switch (step.step) {
		case "change":
			return changePlanting(trx, viewer, place, step.whole);
		case "split":
			return splitPlanting(trx, viewer, place, [step.first, step.second]);
		case "pull_out":
			return pullOutPlanting(trx, viewer, place, step.removedOn);
	}
}
